"""The command: parse, call, write, exit code. This module is its guarded entry point."""

from __future__ import annotations

import errno
import os
import sys

EXIT_READY, EXIT_EXCEEDED, EXIT_UNUSABLE, EXIT_UNANSWERED = 0, 1, 2, 3
EXIT_INTERNAL, EXIT_INTERRUPTED, EXIT_PIPE = 70, 130, 141


def run() -> None:
    """Run the command with the process's arguments and end the process with the exit code.

    No exit code but those above: an uncaught error would end with 1 and read as a finding.
    """
    sys.exit(guarded(sys.argv[1:]))


def guarded(arguments: list[str]) -> int:
    """Exit code of one call; whatever goes wrong inside ends as 70 with a word on where to report it."""
    os.environ.setdefault("OPENBLAS_NUM_THREADS", "1")  # small matrices: threads only cost start-up time
    for name in ("stdout", "stderr"):
        if getattr(sys, name) is None:  # closed by the caller, who wants the exit code alone
            setattr(sys, name, open(os.devnull, "w", encoding="utf-8"))  # noqa: SIM115 (open to the end)
        stream = getattr(sys, name)
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="backslashreplace")  # an ASCII terminal must not end the run
    try:
        code = _version() if arguments == ["--version"] else _called(arguments)
        sys.stdout.flush()
    except KeyboardInterrupt:
        print("interrupted", file=sys.stderr)
        return EXIT_INTERRUPTED
    except BrokenPipeError:
        _forget_stdout()
        return EXIT_PIPE
    except OSError as error:
        if error.errno not in (errno.ENOSPC, errno.EDQUOT, errno.EIO):
            return _internal(error)
        print(f"standard output: {error.strerror}; nothing more was written", file=sys.stderr)
        _forget_stdout()
        return EXIT_UNUSABLE
    except Exception as error:
        return _internal(error)
    if code == EXIT_PIPE:
        _forget_stdout()
    return code


def _version() -> int:
    """Answered before anything else is imported."""
    from stresscheck import __version__

    print(f"stresscheck {__version__}")
    return EXIT_READY


def _called(arguments: list[str]) -> int:
    from stresscheck.cli.app import call

    return call(arguments)


def _forget_stdout() -> None:
    from stresscheck.cli.output import forget_stdout

    forget_stdout()


def _internal(error: Exception) -> int:
    import traceback

    frames = traceback.extract_tb(error.__traceback__)
    last = frames[-1] if frames else None
    place = "" if last is None else f" in {os.path.basename(last.filename)}, line {last.lineno}"
    print(
        f"internal error: {type(error).__name__}{place}: {error}\n"
        "This is a fault of stresscheck, not of your design: nothing was reviewed. Report it to the project with the "
        "design file; STRESSCHECK_TRACE=1 in the environment shows the whole trace.",
        file=sys.stderr,
    )
    if os.environ.get("STRESSCHECK_TRACE"):
        traceback.print_exception(error)
    return EXIT_INTERNAL
