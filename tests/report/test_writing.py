import os
import stat

import pytest

from chainflow.basis.faults import FileFault
from chainflow.report import writing
from chainflow.report.writing import check_directory, check_writable, write_all, write_whole


def test_a_file_is_written(tmp_path):
    write_whole(tmp_path / "a.json", "text\n")
    assert (tmp_path / "a.json").read_text() == "text\n"
    assert [p.name for p in tmp_path.iterdir()] == ["a.json"]


def test_an_old_file_is_replaced_and_keeps_its_permissions(tmp_path):
    path = tmp_path / "a.json"
    path.write_text("old")
    path.chmod(0o640)
    write_whole(path, "new")
    assert path.read_text() == "new"
    assert stat.S_IMODE(path.stat().st_mode) == 0o640


def test_a_new_file_gets_the_usual_permissions(tmp_path):
    usual = tmp_path / "usual"
    usual.write_text("")
    write_whole(tmp_path / "a.json", "")
    assert (tmp_path / "a.json").stat().st_mode == usual.stat().st_mode


def test_a_failure_half_way_leaves_the_old_file(tmp_path, monkeypatch):
    path = tmp_path / "a.json"
    path.write_text("old")

    def full(_):
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(writing.os, "fsync", full)
    with pytest.raises(FileFault, match=r"a\.json cannot be written: No space left on device"):
        write_whole(path, "new")
    assert path.read_text() == "old"
    assert [p.name for p in tmp_path.iterdir()] == ["a.json"]


def test_several_files_are_written_all_or_none(tmp_path, monkeypatch):
    directory = tmp_path / "deep" / "out"
    write_all(directory, {"a.csv": "1", "b.csv": "2"})
    assert sorted(p.name for p in directory.iterdir()) == ["a.csv", "b.csv"]
    calls = iter([None, OSError(28, "No space left on device")])

    def full_at_the_second(_):
        problem = next(calls)
        if problem is not None:
            raise problem

    monkeypatch.setattr(writing.os, "fsync", full_at_the_second)
    with pytest.raises(FileFault, match="No space left"):
        write_all(directory, {"a.csv": "3", "b.csv": "4"})
    assert (directory / "a.csv").read_text() == "1"
    assert sorted(p.name for p in directory.iterdir()) == ["a.csv", "b.csv"]


def test_a_link_stays_and_its_target_is_written(tmp_path):
    target, link = tmp_path / "target", tmp_path / "link"
    target.write_text("old")
    link.symlink_to(target)
    write_whole(link, "new")
    assert link.is_symlink()
    assert target.read_text() == "new"


def test_a_device_is_written_to_and_not_replaced():
    write_whole(writing.Path(os.devnull), "text")
    assert not writing.Path(os.devnull).is_file()


def test_a_directory_is_no_file(tmp_path):
    with pytest.raises(FileFault, match="is a directory: name a file"):
        check_writable(tmp_path)


def test_a_missing_directory_is_named(tmp_path):
    with pytest.raises(FileFault, match="there is no directory"):
        check_writable(tmp_path / "none" / "a.json")


def test_a_file_is_no_directory(tmp_path):
    path = tmp_path / "file"
    path.write_text("")
    with pytest.raises(FileFault, match="is a file: name a directory"):
        check_directory(path)
    with pytest.raises(FileFault, match="there is no directory"):
        check_directory(path / "below")


def test_directories_that_can_be_made_pass(tmp_path):
    check_directory(tmp_path / "a" / "b")
    assert not (tmp_path / "a").exists()


def test_permissions_are_asked_before(tmp_path, monkeypatch):
    # the question is put to the system; the answer is faked, since root may write anywhere
    monkeypatch.setattr(writing.os, "access", lambda path, mode: False)
    with pytest.raises(FileFault, match="permission denied in"):
        check_writable(tmp_path / "a.json")
    (tmp_path / "old.json").write_text("")
    with pytest.raises(FileFault, match=r"old\.json cannot be written: permission denied"):
        check_writable(tmp_path / "old.json")
