"""Files appear whole or not at all."""

import errno
import os

import pytest

from derive.errors import OutputError
from derive.render import write
from derive.render.write import write_all, write_whole


def everything(folder):
    return {p.relative_to(folder).as_posix() for p in folder.rglob("*")}


def test_a_file_is_written_and_its_folder_made(tmp_path):
    write_whole(tmp_path / "sheets" / "a.json", b"data")
    assert (tmp_path / "sheets" / "a.json").read_bytes() == b"data"
    assert everything(tmp_path) == {"sheets", "sheets/a.json"}


def test_a_new_file_has_the_rights_of_any_new_file(tmp_path):
    (tmp_path / "plain").write_bytes(b"")
    write_whole(tmp_path / "ours", b"")
    assert (tmp_path / "ours").stat().st_mode == (tmp_path / "plain").stat().st_mode


def test_an_old_file_is_replaced_and_keeps_its_rights(tmp_path):
    path = tmp_path / "a"
    path.write_bytes(b"old")
    path.chmod(0o640)
    write_whole(path, b"new")
    assert path.read_bytes() == b"new"
    assert path.stat().st_mode & 0o777 == 0o640


@pytest.mark.parametrize("broken", ["write", "fsync", "replace"])
def test_a_full_disk_leaves_the_old_file_and_nothing_else(tmp_path, monkeypatch, broken):
    path = tmp_path / "a.pdf"
    path.write_bytes(b"old")

    def full(*_):
        raise OSError(errno.ENOSPC, "No space left on device")

    if broken == "write":
        real = os.fdopen

        def opened(*args):
            file = real(*args)
            file.close()
            full()

        monkeypatch.setattr(write.os, "fdopen", opened)
    else:
        monkeypatch.setattr(write.os, broken, full)
    with pytest.raises(OutputError, match=r"a\.pdf: cannot be written: No space left") as caught:
        write_whole(path, b"new")
    assert caught.value.cure
    monkeypatch.undo()
    assert path.read_bytes() == b"old"
    assert everything(tmp_path) == {"a.pdf"}


def test_a_folder_in_the_place_of_the_file_is_refused(tmp_path):
    (tmp_path / "a").mkdir()
    with pytest.raises(OutputError, match="folder"):
        write_whole(tmp_path / "a", b"new")
    assert everything(tmp_path) == {"a"}


def test_a_file_in_the_place_of_the_folder_is_refused(tmp_path):
    (tmp_path / "out").write_bytes(b"kept")
    with pytest.raises(OutputError, match="--out"):
        write_whole(tmp_path / "out" / "a", b"new")
    assert (tmp_path / "out").read_bytes() == b"kept"


def test_of_several_files_none_is_written_when_one_cannot_be(tmp_path):
    (tmp_path / "b").mkdir()
    with pytest.raises(OutputError):
        write_all({tmp_path / "a": b"1", tmp_path / "b": b"2", tmp_path / "c": b"3"})
    assert everything(tmp_path) == {"b"}


def test_several_files_are_written_together(tmp_path):
    write_all({tmp_path / "a": b"1", tmp_path / "x" / "b": b"2"})
    assert everything(tmp_path) == {"a", "x", "x/b"}
