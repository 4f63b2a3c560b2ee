"""The parts of supervised work for themselves: the wire, the parent's book, the options."""

import itertools

import click
import pytest
from click.testing import CliRunner
from hypothesis import given
from hypothesis import strategies as st

from symplant.cli.budget import run_supervised
from symplant.cli.options import SECONDS, SIZE, budget_options
from symplant.cli.supervision.channel import FrameReader, Kind, pack, to_bytes, to_text
from symplant.cli.supervision.ledger import Ledger


@given(st.lists(st.tuples(st.sampled_from(Kind), st.binary(max_size=40))), st.lists(st.integers(0, 400)))
def test_messages_survive_any_cutting_of_the_stream(messages, cuts):
    wire = b"".join(pack(kind, payload) for kind, payload in messages)
    reader, read, places = FrameReader(), [], [0, *sorted(cuts), len(wire)]
    for start, end in itertools.pairwise(places):
        read += reader.feed(wire[start:end])
    assert read == messages


@given(st.binary())
def test_bytes_that_are_no_text_come_back_unchanged(data):
    assert to_bytes(to_text(data)) == data


def test_a_stage_taken_up_again_is_unfinished_again():
    book = Ledger(out=lambda _: None, err=lambda _: None)
    for name in (b"poles", b"zeros", b"poles"):
        book.take(Kind.STAGE, name)
    assert (book.finished, book.unfinished) == (["zeros"], ["poles"])


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("12X", "500MB, 2GB or 1.5GiB"),
        ("5M", "5MB or 5MiB"),
        ("0GB", "more than zero"),
        ("-1GB", "not an amount of memory"),
        ("much", "not an amount of memory"),
        ("nan", "not an amount of memory"),
    ],
)
def test_size_at_fault_says_what_would_be_right(text, words):
    with pytest.raises(click.BadParameter, match=words):
        SIZE.convert(text, None, None)


@pytest.mark.parametrize("text", ["0", "-3", "inf", "nan", "soon"])
def test_seconds_at_fault(text):
    with pytest.raises(click.BadParameter, match=r"above zero|not a number of seconds"):
        SECONDS.convert(text, None, None)


def test_captured_streams_get_the_text():
    @click.command()
    @budget_options
    def command(max_seconds, max_memory):
        def job(channel):
            channel.out(f"{max_seconds} {max_memory}\n")
            return 3

        raise SystemExit(run_supervised(job, max_seconds=max_seconds, max_memory=max_memory))

    result = CliRunner().invoke(command, ["--max-seconds", "30", "--max-memory", "1.5GiB"])
    assert (result.exit_code, result.output) == (3, "30.0 1610612736\n")
