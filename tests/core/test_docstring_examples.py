"""The examples in docstrings are true."""

from __future__ import annotations

import doctest
import importlib
import pkgutil

import pytest

import core


def modules_with_examples() -> list[str]:
    names = [module.name for module in pkgutil.walk_packages(core.__path__, "core.")]
    finder = doctest.DocTestFinder(exclude_empty=True)
    return [
        name
        for name in ["core", *names]
        if any(found.examples for found in finder.find(importlib.import_module(name)))
    ]


@pytest.mark.parametrize("name", modules_with_examples())
def test_the_examples_of_a_module_give_what_they_show(name):
    failed, tried = doctest.testmod(importlib.import_module(name))
    assert tried > 0
    assert failed == 0
