"""Settings: a flag, then the environment, then the default; a bad one is named."""

from pathlib import Path

import pytest

from server.settings import DEFAULT_PORT, SettingRefused, default_data_folder, read_settings


def test_a_flag_goes_before_the_environment_and_that_before_the_default(tmp_path):
    environ = {"FIRMHEAD_PORT": "9001", "FIRMHEAD_DATA": str(tmp_path / "env")}

    flagged = read_settings(port="9002", data_folder=str(tmp_path / "flag"), environ=environ)
    assert (flagged.port, flagged.data_folder) == (9002, tmp_path / "flag")
    told = read_settings(environ=environ)
    assert (told.port, told.data_folder) == (9001, tmp_path / "env")
    assert read_settings(environ={"XDG_DATA_HOME": str(tmp_path)}).port == DEFAULT_PORT


@pytest.mark.parametrize("port", ["x", "-1", "65536", "1e3", "80 80", "", "८०८०"])
def test_a_port_that_is_none_is_refused_by_its_name(port):
    with pytest.raises(SettingRefused, match="--port is .*whole number from 0 to 65535"):
        read_settings(port=port, environ={})


def test_a_bad_port_of_the_environment_is_refused_by_that_name():
    with pytest.raises(SettingRefused, match="FIRMHEAD_PORT"):
        read_settings(environ={"FIRMHEAD_PORT": "many"})


def test_stations_are_kept_in_the_users_data_folder(tmp_path):
    assert default_data_folder({"XDG_DATA_HOME": str(tmp_path)}) == tmp_path / "firmhead"
    assert default_data_folder({}) == Path.home() / ".local" / "share" / "firmhead"
    # the standard says that a relative one is to be ignored
    assert default_data_folder({"XDG_DATA_HOME": "here"}) == default_data_folder({})


def test_a_data_folder_is_absolute():
    assert read_settings(data_folder="here", environ={}).data_folder == Path.cwd() / "here"


def test_only_loopback_addresses_are_served():
    settings = read_settings(environ={})

    assert settings.host == "127.0.0.1"
    assert settings.allowed_hosts == ("127.0.0.1", "localhost", "[::1]")
