"""The client inside LibreOffice and its worker: values there and back, restart, time-out, versions, no orphan."""

import ast
import math
import os
import struct
import sys
import textwrap
import time
from pathlib import Path

import pytest

from doubler.hosts import calc_client
from doubler.hosts.calc_client import PROTOCOL, Client, cell_argument, error_number, trimmed
from doubler.hosts.calc_extension import inside_libreoffice, settings
from doubler.hosts.worker import decoded

AXIAL = ("12 kN", "150 mm^2", "MPa")


@pytest.fixture
def client():
    made = Client(settings())
    yield made
    made.stop()


def fake(tmp_path, body):
    """A worker that misbehaves; it greets as the real one does."""
    own = settings()
    greeting = {"protocol": PROTOCOL, "version": own["version"], "digest": own["digest"]}
    script = tmp_path / "worker.py"
    script.write_text(
        "import sys, json, time, os\nfrom doubler.hosts.calc_pipe import Reader, packed\n"
        f"marker = {str(tmp_path / 'died')!r}\ndef say(data):\n    os.write(1, data)\n"
        f"say(json.dumps({greeting!r}).encode() + b'\\n')\nreader = Reader(0)\n"
        f"def ask():\n    return reader.frame(None)\n{textwrap.dedent(body)}"
    )
    return {**own, "command": [sys.executable, str(script)], "timeout": 0.5}


def code_of(value):
    assert math.isnan(value)
    return struct.unpack("<Q", struct.pack("<d", value))[0] & 0xFFFF


def test_a_call_gives_a_grid_and_a_range_is_one_call(client):
    assert client.call("STRESS_AXIAL", AXIAL) == ((80.0,),)
    column = (("kN",), (1.0,), (2.0,), ("",), ("",))
    before = client.asked
    assert client.call("STRESS_AXIAL", (column, "100 mm^2", "MPa")) == ((10.0,), (20.0,))
    assert client.asked == before + 1


def test_the_same_call_is_asked_once_and_errors_keep_their_reason(client):
    for _ in range(2):
        assert client.call("STRESS_AXIAL", AXIAL) == ((80.0,),)
        assert client.asked == 1
    for _ in range(2):
        client.reasons.clear()
        client.call("STRESS_AXIAL", ("12 kN", "0 mm^2", "MPa"))
        assert client.asked == 2
        assert "area" in next(iter(client.reasons))


def test_errors_are_true_error_values_and_their_reason_is_told(client):
    [[value]] = client.call("STRESS_AXIAL", ("12 kN", "0 mm^2", "MPa"))
    assert code_of(value) == 503
    assert "area" in client.reason("STRESS_AXIAL", ("12 kN", "0 mm^2", "MPa"))
    [[value]] = client.call("STRESS_AXIAL", ((("",),), 150.0, "N-mm"))
    assert code_of(value) == 519
    assert "empty" in client.reason("STRESS_AXIAL", ((("",),), 150.0, "N-mm"))
    assert client.reason("STRESS_AXIAL", AXIAL) == ""


def test_every_error_value_has_its_own_code():
    assert len({code_of(error_number(text)) for text in calc_client.CODES}) == len(calc_client.CODES)


def test_arguments_are_trimmed_and_empty_cells_stay_empty():
    assert cell_argument((("",) * 2,) * 5) == (("", ""),)
    assert cell_argument(((1.0, ""), ("", ""), ("", ""))) == ((1.0, ""),)
    assert decoded(((1.0, ""),)) == [[1.0, None]]
    assert cell_argument(()) == (("",),)
    assert cell_argument((("12 kN",),)) == "12 kN"
    assert cell_argument(3) == 3.0
    assert trimmed(("12 kN", None, None)) == ["12 kN"]


def test_a_killed_worker_is_started_anew_within_the_call(client):
    client.call("STRESS_AXIAL", AXIAL)
    first = client.worker.process
    first.kill()
    first.wait()
    assert client.call("STRESS_AXIAL", ("24 kN", "150 mm^2", "MPa")) == ((160.0,),)
    assert client.worker.process.pid != first.pid


def test_a_worker_that_dies_in_a_call_is_asked_once_more(tmp_path):
    body = """
        while True:
            serial, request = ask()
            if not os.path.exists(marker):
                open(marker, "w").close()
                os._exit(1)
            say(packed(serial, (((7.0,),), ())))
    """
    client = Client(fake(tmp_path, body))
    assert client.call("STRESS_AXIAL", AXIAL) == ((7.0,),)
    client.stop()


def test_a_worker_that_hangs_is_given_up_in_time_and_then_left_alone(tmp_path):
    client = Client(fake(tmp_path, "time.sleep(60)"))
    start = time.monotonic()
    for _ in range(2):
        [[value]] = client.call("STRESS_AXIAL", AXIAL)
        assert code_of(value) == 519
    assert any("no answer within 0.5 s" in reason for reason in client.reasons)
    client.call("STRESS_AXIAL", AXIAL)
    assert time.monotonic() - start < 20
    assert any("twice" in reason for reason in client.reasons)
    assert client.worker is None


RUBBISH = {
    "text": "say(b'hello, this is no frame at all\\n')",
    "another question's answer": "say(packed(serial + 1, (((1.0,),), ())))",
    "a garbled answer": "frame = packed(serial, (((1.0,),), ()))\n    say(frame[:-3] + b'xxx')",
    "half an answer, then the end": "say(packed(serial, (((1.0,),), ()))[:-4])\n    os._exit(0)",
    "an answer of another shape": "say(packed(serial, 1.0))",
    "text before the answer": "say(b'warning: ' + packed(serial, (((1.0,),), ())))",
}


@pytest.mark.parametrize("rubbish", RUBBISH.values(), ids=RUBBISH)
def test_rubbish_is_never_taken_for_an_answer(tmp_path, rubbish):
    client = Client(fake(tmp_path, f"while True:\n    serial, request = ask()\n    {rubbish}\n"))
    [[value]] = client.call("STRESS_AXIAL", AXIAL)
    assert code_of(value) == 519
    assert any("doubler host calc status" in reason for reason in client.reasons)
    client.stop()


@pytest.mark.parametrize("said", ["", "hello\\n", "[1]\\n", "x" * 100_000])
def test_a_worker_that_does_not_greet_answers_nothing(tmp_path, said):
    script = tmp_path / "worker.py"
    script.write_text(f"import sys, time\nsys.stdout.write('{said}')\nsys.stdout.flush()\n")
    client = Client({**settings(), "command": [sys.executable, str(script)]})
    [[value]] = client.call("STRESS_AXIAL", AXIAL)
    assert code_of(value) == 519
    assert client.worker is None


def test_another_version_answers_nothing(tmp_path):
    client = Client({**settings(), "version": "0.0.1"})
    [[value]] = client.call("STRESS_AXIAL", AXIAL)
    assert code_of(value) == 519
    assert any("doubler host calc install" in reason for reason in client.reasons)
    assert client.worker is None


def test_what_is_printed_by_the_tool_stays_off_the_pipe(tmp_path):
    script = tmp_path / "noisy.py"
    script.write_text(
        "import os, sys\nfrom doubler import catalogue\nfrom doubler.hosts import worker\n"
        "known = catalogue.call_cells\n"
        "def noisy(*a):\n    print('stray')\n    os.system('echo stray')\n    return known(*a)\n"
        "catalogue.call_cells = noisy\nworker.main()\n"
    )
    client = Client({**settings(), "command": [sys.executable, "-E", "-P", str(script)]})
    assert client.call("STRESS_AXIAL", AXIAL) == ((80.0,),)
    client.stop()


def test_the_worker_ends_when_its_pipe_ends(client):
    client.call("STRESS_AXIAL", AXIAL)
    process = client.worker.process
    process.stdin.close()
    assert process.wait(10) == 0


@pytest.mark.skipif(os.name != "posix", reason="parents are watched on POSIX")
def test_a_busy_worker_ends_with_the_program_that_started_it(tmp_path):
    import subprocess

    busy = tmp_path / "busy.py"
    busy.write_text(
        "import time\nfrom doubler import catalogue\nfrom doubler.hosts import worker\n"
        "catalogue.call_cells = lambda *a: time.sleep(120)\nworker.main()\n"
    )
    note = tmp_path / "pid"
    owner = (
        "import subprocess, sys, os\n"
        f"p = subprocess.Popen([{sys.executable!r}, {str(busy)!r}], stdin=subprocess.PIPE, stdout=subprocess.PIPE)\n"
        "from doubler.hosts.calc_pipe import packed\n"
        "p.stdout.readline()\np.stdin.write(packed(1, ('call', 'STRESS_AXIAL', ()))); p.stdin.flush()\n"
        f"open({str(note)!r}, 'w').write(str(p.pid))\nos._exit(0)\n"
    )
    subprocess.run([sys.executable, "-c", owner], check=True, timeout=60)
    pid = int(note.read_text())
    limit = time.monotonic() + 15
    while time.monotonic() < limit and _alive(pid):
        time.sleep(0.2)
    assert not _alive(pid)


def _alive(pid):
    try:
        state = Path(f"/proc/{pid}/stat").read_text().rsplit(")", 1)[1].split()[0]
    except OSError:
        return False
    return state != "Z"


@pytest.mark.parametrize("module", inside_libreoffice())
def test_what_lives_in_libreoffice_reads_as_python_3_8_and_imports_the_standard_library_only(module):
    tree = ast.parse(inside_libreoffice()[module], feature_version=(3, 8))
    roots = {
        name.split(".")[0]
        for node in ast.walk(tree)
        if isinstance(node, ast.Import | ast.ImportFrom)
        for name in ([node.module] if isinstance(node, ast.ImportFrom) else [alias.name for alias in node.names])
    }
    own = {Path(name).stem for name in inside_libreoffice()}
    assert roots <= set(sys.stdlib_module_names) | own


@pytest.mark.parametrize("module", inside_libreoffice())
def test_no_type_of_python_3_9_is_subscripted_at_run_time_inside_libreoffice(module):
    tree = ast.parse(inside_libreoffice()[module])
    values = [node.value for node in ast.walk(tree) if isinstance(node, ast.Assign)]
    heads = {
        node.value.id
        for value in values
        for node in ast.walk(value)
        if isinstance(node, ast.Subscript) and isinstance(node.value, ast.Name)
    }
    assert not heads & {"tuple", "list", "dict", "set"}
