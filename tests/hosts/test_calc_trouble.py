"""Trouble with the worker or with LibreOffice: no wrong number, no orphan, and the reason is told in the sheet."""

import json
import os
import shutil
import signal
import subprocess
import sys
import textwrap
import time

import pytest

from doubler.errors import InputError
from doubler.hosts import calc_profile
from doubler.hosts.calc_client import PROTOCOL

pytestmark = [pytest.mark.office, pytest.mark.skipif(os.name != "posix", reason="looks at the process table")]

LONG = "DOUBLER.FUNCTIONS."
CALL = f'={LONG}STRESS_AXIAL("12 kN";"150 mm^2";"MPa")'
VALUE = [[{"error": 519}]]


def processes(words):
    told = subprocess.run(["ps", "-ewwo", "pid,stat,args"], capture_output=True, text=True, check=True).stdout
    lines = [line.split(None, 2) for line in told.splitlines()]
    return {int(pid) for pid, state, args in lines[1:] if words in args and state[0] != "Z"}


def gone(words, seconds=15.0):
    limit = time.monotonic() + seconds
    while processes(words) and time.monotonic() < limit:
        time.sleep(0.2)
    return not processes(words)


@pytest.fixture
def own(profile, tmp_path):
    """A copy of the installed profile, and the means to change what the add-in was told of its worker."""
    copy = tmp_path / "profile"
    shutil.copytree(profile, copy, ignore=shutil.ignore_patterns(".lock"))

    def change(**told):
        [path] = (copy / "user" / "uno_packages").rglob("doubler_settings.json")
        path.write_text(json.dumps({**json.loads(path.read_text()), **told}))
        return copy

    return change


def faulty(tmp_path, own, body):
    """A worker that greets as the real one does and then misbehaves; its script's path names it among the processes."""
    script = tmp_path / "faulty_worker.py"
    settings = json.loads(next((own() / "user" / "uno_packages").rglob("doubler_settings.json")).read_text())
    greeting = {"protocol": PROTOCOL, "version": settings["version"], "digest": settings["digest"]}
    script.write_text(
        "import json, os, time\nfrom doubler.hosts.calc_pipe import Reader, packed\nreader = Reader(0)\n"
        f"os.write(1, json.dumps({greeting!r}).encode() + b'\\n')\n{textwrap.dedent(body)}"
    )
    return script


def shown(session, reason=False):
    session("open", "sheet", "")
    try:
        session("put", "sheet", "", {"D1": CALL, "E1": "=MAX(D1;0)", "F1": f"={LONG}UNIT_REASON(D1)"})
        return session("read", "sheet", "", "F1")[0][0] if reason else session("read", "sheet", "", "D1:E1")
    finally:
        session("shut", "sheet")


@pytest.mark.parametrize(
    ("body", "told"),
    [
        ("time.sleep(120)", "no answer within 0.5 s"),
        ("os.write(1, b'rubbish' * 100)\ntime.sleep(120)", "doubler host calc status"),
        ("reader.frame(None)\nos.write(1, packed(99, (((80.0,),), ())))\ntime.sleep(120)", "another question"),
        ("os._exit(1)", "doubler host calc status"),
    ],
    ids=["hangs", "prints rubbish", "answers another question", "ends at once"],
)
def test_a_faulty_worker_gives_an_error_value_its_reason_and_leaves_no_process(own, tmp_path, body, told):
    script = faulty(tmp_path, own, body)
    profile = own(command=[sys.executable, "-E", "-P", str(script)], timeout=0.5)
    with calc_profile.Driven(profile) as session:
        start = time.monotonic()
        assert shown(session) == [VALUE[0] * 2]
        assert told in shown(session, reason=True) or "twice" in shown(session, reason=True)
        assert time.monotonic() - start < 30
    assert gone(str(script))


def test_a_worker_of_another_version_answers_nothing_and_the_cure_is_told(own):
    profile = own(version="0.0.1")
    with calc_profile.Driven(profile) as session:
        assert shown(session) == [VALUE[0] * 2]
        assert "doubler host calc install" in shown(session, reason=True)


def children(words, parent):
    return {pid for pid in processes(words) if os.path.exists(f"/proc/{pid}/stat") and _parent(pid) == parent}


def _parent(pid):
    with open(f"/proc/{pid}/stat") as source:
        return int(source.read().rsplit(")", 1)[1].split()[1])


def program_of(profile):
    [pid] = processes("soffice.bin") & processes(profile.resolve().as_uri())
    return pid


def test_two_documents_share_one_worker_which_is_replaced_when_killed_and_ends_with_the_program(own):
    profile = own()
    with calc_profile.Driven(profile) as session:
        program = program_of(profile)
        for key in ("one", "two"):
            session("open", key, "")
            session("put", key, "", {"D1": CALL})
            assert session("read", key, "", "D1") == [[80.0]]
        [worker] = children("doubler.hosts.worker", program)
        os.kill(worker, signal.SIGKILL)
        session("put", "one", "", {"D1": CALL.replace("12 kN", "24 kN")})
        session("put", "two", "", {"D1": CALL.replace("12 kN", "48 kN")})
        assert session("read", "one", "", "D1") == [[160.0]]
        assert session("read", "two", "", "D1") == [[320.0]]
        [other] = children("doubler.hosts.worker", program)
        assert other != worker
    assert not os.path.exists(f"/proc/{other}") or _is_zombie(other)


def _is_zombie(pid):
    with open(f"/proc/{pid}/stat") as source:
        return source.read().rsplit(")", 1)[1].split()[0] == "Z"


def test_a_document_closed_leaves_the_other_s_functions_working(own):
    with calc_profile.Driven(own()) as session:
        for key in ("one", "two"):
            session("open", key, "")
            session("put", key, "", {"A2": 150.0, "D1": f'={LONG}STRESS_AXIAL(A1;A2;"N-mm")'})
            assert session("read", key, "", "D1") == VALUE
        session("put", "two", "", {"A1": 0.0})
        session("shut", "one")
        session("calculate", "two")
        assert session("read", "two", "", "D1") == [[0.0]]


def test_libreoffice_killed_in_the_middle_of_a_call_leaves_no_worker(own, tmp_path):
    busy = tmp_path / "busy"
    body = f"""
        import threading
        from doubler.hosts.worker import _end_with_parent
        threading.Thread(target=_end_with_parent, args=(os.getppid(),), daemon=True).start()
        reader.frame(None)
        open({str(busy)!r}, "w").close()
        time.sleep(120)
    """
    script = faulty(tmp_path, own, body)
    profile = own(command=[sys.executable, "-E", "-P", str(script)], timeout=60.0)
    session = calc_profile.Driven(profile)
    try:
        session("open", "sheet", "")
        session("put", "sheet", "", {"D1": CALL})
        session.send("read", "sheet", "", "D1")
        limit = time.monotonic() + 20
        while not busy.exists() and time.monotonic() < limit:
            time.sleep(0.1)
        assert processes(str(script))
        os.kill(program_of(profile), signal.SIGKILL)
        with pytest.raises(InputError):
            session.answer()
        assert gone(str(script))
    finally:
        session.close()


def test_libreoffice_killed_between_calls_leaves_no_worker_and_the_next_start_computes(own):
    profile = own()
    session = calc_profile.Driven(profile)
    try:
        session("open", "sheet", "")
        session("put", "sheet", "", {"D1": CALL})
        assert session("read", "sheet", "", "D1") == [[80.0]]
        program = program_of(profile)
        [worker] = children("doubler.hosts.worker", program)
        os.kill(program, signal.SIGKILL)
        limit = time.monotonic() + 15
        while os.path.exists(f"/proc/{worker}") and not _is_zombie(worker) and time.monotonic() < limit:
            time.sleep(0.2)
        assert not os.path.exists(f"/proc/{worker}") or _is_zombie(worker)
    finally:
        session.close()
    with calc_profile.Driven(profile) as again:
        assert shown(again) == [[80.0, 80.0]]
