#!/usr/bin/env python3
"""Set Gainwright up and start it. Needs nothing but Python 3.11, 3.12 or 3.13 and a network the first time.

python3 resources/quickstart.py          a private environment, then the first sample project in a window
                                         (with no display: its sheets as PDF, its level diagram as PNG)
python3 resources/quickstart.py test     the test tools too, then the whole suite; ends with its status
python3 resources/quickstart.py setup    both sets of packages, and nothing is started
"""

import ctypes
import hashlib
import json
import os
import shutil
import subprocess
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
ENVIRONMENT = ROOT / ".venv"
STAMP = ENVIRONMENT / "gainwright-setup.json"
CONSTRAINTS = ROOT / "resources" / "constraints.txt"
SAMPLE = ROOT / "sample_projects" / "meeting_room.gainwright"
SHEETS = ROOT / "gainwright-sheets"
OLDEST, NEWEST = (3, 11), (3, 13)

# What the toolkit's libraries ask of a Linux system, and the Debian package that holds it.
DRAWING_LIBRARIES = {
    "libGL.so.1": "libgl1",
    "libEGL.so.1": "libegl1",
    "libX11.so.6": "libx11-6",
    "libdbus-1.so.3": "libdbus-1-3",
    "libfontconfig.so.1": "libfontconfig1",
    "libfreetype.so.6": "libfreetype6",
    "libglib-2.0.so.0": "libglib2.0-0",
    "libxkbcommon.so.0": "libxkbcommon0",
}
WINDOW_LIBRARIES = {
    "libX11-xcb.so.1": "libx11-xcb1",
    "libxcb.so.1": "libxcb1",
    "libxcb-cursor.so.0": "libxcb-cursor0",
    "libxcb-icccm.so.4": "libxcb-icccm4",
    "libxcb-image.so.0": "libxcb-image0",
    "libxcb-keysyms.so.1": "libxcb-keysyms1",
    "libxcb-randr.so.0": "libxcb-randr0",
    "libxcb-render.so.0": "libxcb-render0",
    "libxcb-render-util.so.0": "libxcb-render-util0",
    "libxcb-shape.so.0": "libxcb-shape0",
    "libxcb-shm.so.0": "libxcb-shm0",
    "libxcb-sync.so.1": "libxcb-sync1",
    "libxcb-util.so.1": "libxcb-util1",
    "libxcb-xfixes.so.0": "libxcb-xfixes0",
    "libxcb-xkb.so.1": "libxcb-xkb1",
    "libxkbcommon-x11.so.0": "libxkbcommon-x11-0",
    "libwayland-client.so.0": "libwayland-client0",
    "libwayland-cursor.so.0": "libwayland-cursor0",
    "libcups.so.2": "libcups2",
}
# Programs outside Python that judge our numbers and pages; the tests that need one say so when it is missing.
JUDGES = {"ngspice": "ngspice", "pdftotext": "poppler-utils"}


class Stop(Exception):
    """The set-up cannot go on; the message says what to do."""


def say(text: str) -> None:
    print(text, flush=True)


# ----------------------------------------------------------------------------------------------- Python
def fits(version: "tuple[int, ...]") -> bool:
    return OLDEST <= version[:2] <= NEWEST


def succeeds(command: "list[str]") -> bool:
    return subprocess.call(command, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL) == 0


def version_of(command: "list[str]") -> "tuple[int, ...]":
    """Version of a Python, or () where it does not start (a launcher without the version behind it)."""
    question = "import sys; print(*sys.version_info[:3])"
    try:
        answer = subprocess.check_output([*command, "-c", question], stderr=subprocess.DEVNULL, timeout=60)
        return tuple(int(part) for part in answer.split())
    except (OSError, ValueError, subprocess.SubprocessError):
        return ()


def other_python() -> "list[str]":
    """A Python on this machine that fits, where the one that runs this does not."""
    here = "%d.%d" % sys.version_info[:2]
    for minor in (13, 12, 11):
        for command in ([f"python3.{minor}"], ["py", f"-3.{minor}"]):
            if shutil.which(command[0]) and fits(version_of(command)):
                say(f"This is Python {here}; using {' '.join(command)} instead.")
                return command
    raise Stop(
        f"This is Python {here}, and Gainwright runs on Python 3.11, 3.12 or 3.13.\n"
        "Install one of these (python.org, or your system's packages), then run this again with it:\n"
        "    python3.12 resources/quickstart.py"
    )


# -------------------------------------------------------------------------------------- system packages
def as_root() -> "list[str] | None":
    """What to put before a command to run it as root without a question; None where that cannot be."""
    if os.name != "posix":
        return None
    if os.geteuid() == 0:
        return []
    if shutil.which("sudo") and succeeds(["sudo", "-n", "true"]):
        return ["sudo", "-n"]
    return None


def apt_line(packages: "list[str]") -> str:
    return f"sudo apt-get update && sudo apt-get install -y {' '.join(packages)}"


def apt_install(packages: "list[str]") -> bool:
    """Install Debian packages where it may; True when done."""
    root = as_root()
    if root is None or not shutil.which("apt-get"):
        return False
    say(f"      installing with apt: {' '.join(packages)}")
    quiet = ["env", "DEBIAN_FRONTEND=noninteractive", "apt-get", "-q", "-o", "DPkg::Lock::Timeout=300"]
    follow([*root, *quiet, "update"], show=())
    status, tail = follow(
        [*root, *quiet, "install", "-y", "--no-install-recommends", *packages], show=("Setting up",)
    )
    if status:
        say("      apt-get failed:\n" + tail)
    return status == 0


def missing_libraries(wanted: "dict[str, str]") -> "dict[str, str]":
    def loads(name: str) -> bool:
        try:
            ctypes.CDLL(name)
        except OSError:
            return False
        return True

    return {name: package for name, package in wanted.items() if not loads(name)}


def provide_libraries(wanted: "dict[str, str]") -> None:
    """See that the shared libraries are there: install them, or stop with the line that does."""
    if not sys.platform.startswith("linux"):
        return
    missing = missing_libraries(wanted)
    if missing and apt_install(sorted(set(missing.values()))):
        missing = missing_libraries(missing)
    if not missing:
        return
    names = " ".join(missing)
    if shutil.which("apt-get"):
        line = apt_line(sorted(set(missing.values())))
    elif shutil.which("dnf") or shutil.which("zypper"):
        tool = "dnf" if shutil.which("dnf") else "zypper"
        line = f"sudo {tool} install " + " ".join(f"'{name}()(64bit)'" for name in missing)
    else:
        raise Stop(f"These shared libraries are missing; install the packages that hold them:\n    {names}")
    raise Stop(f"Shared libraries are missing: {names}\nRun this line, then this again:\n    {line}")


def provide_judges() -> None:
    """Install the outside programs that judge our results where it may; say which are missing otherwise."""
    missing = {tool: package for tool, package in JUDGES.items() if not shutil.which(tool)}
    if missing and sys.platform.startswith("linux") and apt_install(sorted(missing.values())):
        missing = {tool: package for tool, package in missing.items() if not shutil.which(tool)}
    if not missing:
        return
    packages = sorted(missing.values())
    say(f"      missing: {', '.join(missing)}. The tests judged by it are skipped. To have them run, first:")
    if sys.platform == "darwin":
        say(
            "          brew install "
            + " ".join("poppler" if name == "poppler-utils" else name for name in packages)
        )
    elif shutil.which("apt-get"):
        say("          " + apt_line(packages))
    else:
        say("          install " + " and ".join(packages) + " and put them on PATH")


# ------------------------------------------------------------------------------------------ environment
def follow(command: "list[str]", show: "tuple[str, ...]") -> "tuple[int, str]":
    """Run a command, show the lines that begin with one of `show`; status and last lines."""
    lines: list[str] = []
    with subprocess.Popen(
        command, cwd=ROOT, env=clean_environment(), stdin=subprocess.DEVNULL,
        stdout=subprocess.PIPE, stderr=subprocess.STDOUT, text=True, errors="replace",
    ) as running:  # fmt: skip
        assert running.stdout is not None
        for line in running.stdout:
            lines.append(line.rstrip())
            if line.strip().startswith(show):
                say(f"      {line.strip()[:100]}")
    return running.returncode, "\n".join(f"      | {line}" for line in lines[-15:])


def clean_environment() -> "dict[str, str]":
    """The environment without what would lead pip or Python out of ours."""
    dropped = {
        "PYTHONPATH",
        "PYTHONHOME",
        "VIRTUAL_ENV",
        "PIP_TARGET",
        "PIP_PREFIX",
        "PIP_REQUIRE_VIRTUALENV",
    }
    kept = {name: value for name, value in os.environ.items() if name not in dropped}
    return {**kept, "PIP_USER": "0", "PIP_DISABLE_PIP_VERSION_CHECK": "1", "PYTHONUNBUFFERED": "1"}


def python_inside() -> str:
    return str(ENVIRONMENT / ("Scripts/python.exe" if os.name == "nt" else "bin/python"))


def is_sound() -> bool:
    """Whether the environment's own Python starts, fits and has pip."""
    inside = python_inside()
    return fits(version_of([inside])) and succeeds([inside, "-m", "pip", "--version"])


def make_environment() -> None:
    number = "%d.%d" % sys.version_info[:2]
    if not succeeds([sys.executable, "-c", "import venv, ensurepip"]):
        package = f"python{number}-venv"
        if not apt_install([package]):
            hint = (
                f"Run this line, then this again:\n    {apt_line([package])}"
                if shutil.which("apt-get")
                else ""
            )
            raise Stop(f"Python {number} here lacks its modules venv and ensurepip. {hint}")
    status, tail = follow([sys.executable, "-m", "venv", "--clear", str(ENVIRONMENT)], show=())
    if status:
        raise Stop(f"Python {number} could not make the environment {ENVIRONMENT}:\n{tail}")


def fingerprint() -> str:
    """What the installed packages follow from: when it changes they are installed again."""
    digest = hashlib.sha256(str(ROOT).encode())
    for path in (ROOT / "pyproject.toml", CONSTRAINTS, ROOT / "app" / "version.py"):
        digest.update(path.read_bytes())
    digest.update(repr(version_of([python_inside()])).encode())
    return digest.hexdigest()


def is_installed(extras: "set[str]") -> bool:
    try:
        stamp = json.loads(STAMP.read_text(encoding="utf-8"))
        return stamp["fingerprint"] == fingerprint() and extras <= set(stamp["extras"])
    except (OSError, ValueError, KeyError):
        return False


def pip_install(what: "list[str]") -> None:
    shown = ("Downloading", "Installing collected")
    command = [python_inside(), "-m", "pip", "install", "--no-input", "-c", str(CONSTRAINTS), *what]
    status, tail = follow(command, show=shown)
    if status:
        raise Stop(
            f"pip could not install the packages:\n{tail}\n"
            "Is there a network, and room on the disk? Run this again: what is already there is kept."
        )


def provide_packages(extras: "set[str]") -> None:
    """Make the private environment and install what is pinned; at once back when that is done already."""
    if not (ENVIRONMENT.exists() and is_sound()):
        say("      making the environment")
        make_environment()
    if is_installed(extras):
        say("      already there")
        return
    STAMP.unlink(missing_ok=True)
    say("      installing the pinned packages (about 150 MB the first time)")
    pip_install(["hatchling", "editables"])
    wanted = f".[{','.join(sorted(extras))}]" if extras else "."
    pip_install(["--no-build-isolation", "-e", wanted])
    STAMP.write_text(json.dumps({"extras": sorted(extras), "fingerprint": fingerprint()}), encoding="utf-8")


# ----------------------------------------------------------------------------------------- the commands
def why_no_window() -> str:
    """Why no window can open here; empty where one can."""
    if os.environ.get("QT_QPA_PLATFORM", "").split(":")[0] in ("offscreen", "minimal"):
        return "QT_QPA_PLATFORM asks for no screen"
    if not sys.platform.startswith("linux"):
        return ""
    if os.environ.get("WAYLAND_DISPLAY"):
        return ""
    if not os.environ.get("DISPLAY"):
        return "neither DISPLAY nor WAYLAND_DISPLAY is set"
    try:
        x11 = ctypes.CDLL("libX11.so.6")
    except OSError:
        return ""
    x11.XOpenDisplay.restype = ctypes.c_void_p
    return "" if x11.XOpenDisplay(None) else f"nothing answers at DISPLAY={os.environ['DISPLAY']}"


def run_app(*arguments: str, screen: bool = True) -> int:
    environment = clean_environment()
    if not screen:
        environment["QT_QPA_PLATFORM"] = "offscreen"
    return subprocess.call([python_inside(), "-m", "app", *arguments], cwd=ROOT, env=environment)


def start() -> int:
    reason = why_no_window()
    say("[1/3] Private environment in .venv")
    provide_packages(set())
    say("[2/3] Shared libraries")
    provide_libraries(DRAWING_LIBRARIES if reason else {**DRAWING_LIBRARIES, **WINDOW_LIBRARIES})
    if not reason:
        say(f"[3/3] Opening {SAMPLE.name}; close the window to end")
        return run_app(str(SAMPLE))
    say(f"[3/3] No display ({reason}): writing sheets and level diagram instead")
    SHEETS.mkdir(exist_ok=True)
    jobs = {"sheet": SHEETS / f"{SAMPLE.stem}.pdf", "diagram": SHEETS / f"{SAMPLE.stem}.png"}
    for command, target in jobs.items():
        status = run_app(command, str(SAMPLE), "-o", str(target), screen=False)
        if status:
            return status
        say(f"      wrote {target.relative_to(ROOT)}")
    return 0


def setup() -> int:
    say("[1/3] Private environment in .venv, with the test tools")
    provide_packages({"test"})
    say("[2/3] Shared libraries")
    provide_libraries({**DRAWING_LIBRARIES, **WINDOW_LIBRARIES})
    say("[3/3] Outside judges")
    provide_judges()
    return 0


def test(arguments: "list[str]") -> int:
    setup()
    say("Running the tests")
    return subprocess.call([python_inside(), "-m", "pytest", *arguments], cwd=ROOT, env=clean_environment())


def main(arguments: "list[str]") -> int:
    try:
        if not fits(sys.version_info[:2]):
            return subprocess.call([*other_python(), __file__, *arguments])
        if not arguments:
            return start()
        if arguments[0] == "test":
            return test(arguments[1:])
        if arguments == ["setup"]:
            return setup()
        say(__doc__ or "")
        return 0 if arguments[0] in ("-h", "--help", "help") else 2
    except Stop as stop:
        print(f"\n{stop}", file=sys.stderr, flush=True)
        return 1
    except KeyboardInterrupt:
        print("\nStopped. Run this again to go on.", file=sys.stderr, flush=True)
        return 130


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
