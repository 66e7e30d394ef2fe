"""The templates' environment."""

import pytest
from jinja2 import TemplateNotFound, UndefinedError

from app.web.rendering import environment, render


def test_everything_is_escaped():
    template = environment().from_string("{{ text }}")
    assert template.render(text="<b>&\"'") == "&lt;b&gt;&amp;&#34;&#39;"


def test_a_name_that_was_not_given_is_an_error():
    with pytest.raises(UndefinedError):
        environment().from_string("{{ missing }}").render()


def test_a_template_that_is_not_there():
    with pytest.raises(TemplateNotFound):
        render("no such template.html")
