"""Do what ``check DOCUMENT`` does and print the processor time of every stage.

Run by ``startup.py``, once per process, since only the first import of a module costs anything.
Each line is a name, a tab and a time [s].
"""

import sys
import time

last = time.process_time()


def stage(name: str) -> None:
    """Print the time since the last stage."""
    global last
    now = time.process_time()
    print(f"{name}\t{now - last:.6f}")
    last = time.process_time()


def main(document: str) -> None:
    import gc

    gc.disable()
    from enclosure_check.cli.arguments import parser

    parser().parse_args(["check", document])
    stage("command line")
    import numpy  # noqa: F401 - its import is what is timed

    stage("import numpy")
    import yaml  # noqa: F401 - as above

    stage("import yaml")
    import enclosure_check.description.load
    import enclosure_check.library.rows

    stage("import description")
    import enclosure_check.check

    stage("import physics to findings")
    import enclosure_check.report.text
    import enclosure_check.report.writers

    stage("import report")
    loaded = enclosure_check.description.load.load_document(document)
    stage("load the document")
    report = enclosure_check.check.check(loaded)
    stage("build, solve, findings")
    text = enclosure_check.report.text.write_text(
        report, enclosure_check.report.options.WriterOptions()
    )
    stage("write the report")
    assert text


main(sys.argv[1])
