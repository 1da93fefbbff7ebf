"""JUnit XML against the schema of a build server's plugin (junit-10.xsd, MIT licence, carried by
the sources of pytest), with xmlschema. Usage: validate_junit.py PYTEST_SDIST FILE..."""

import sys
import tarfile

import xmlschema


def schema(archive: str) -> xmlschema.XMLSchema:
    with tarfile.open(archive) as files:
        name = next(n for n in files.getnames() if n.endswith("/junit-10.xsd"))
        return xmlschema.XMLSchema(files.extractfile(name).read().decode())


def main(archive: str, *paths: str) -> None:
    junit = schema(archive)
    wrong = '<testsuite name="a"><testcase/></testsuite>'
    assert not junit.is_valid(wrong), "the validator tells a wrong file"
    for path in paths:
        junit.validate(path)
        print(f"{path}: valid under junit-10.xsd")


if __name__ == "__main__":
    main(*sys.argv[1:])
