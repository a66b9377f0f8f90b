"""Eliminating the surface nodes gives what a network with every node kept gives."""

import numpy as np
import pytest

from solver.linear import Field
from solver.system.surface import Joint, Sink, Surface

EVERYWHERE = (slice(None), slice(None))


def example(rng, held=False):
    """A surface of 3 x 4 nodes with a film, a contact, two overlapping joints and source heat."""
    held_rise = np.full((3, 4), np.nan)
    film = rng.uniform(0.1, 1.0, (3, 4))
    if held:  # no film acts in front of a held node
        held_rise[:, 0] = 7.0
        film[:, 0] = 0.0
    sinks = (Sink("top", EVERYWHERE, film, 5.0),
             Sink("contact:stud", (slice(1, 3), slice(2, 4)), rng.uniform(1.0, 9.0, (2, 2)), -3.0))
    joints = (Joint(0, (slice(0, 2), slice(0, 3)), rng.uniform(0.1, 5.0, (2, 3))),
              Joint(1, (slice(1, 3), slice(1, 4)), rng.uniform(0.1, 5.0, (2, 3))))
    return Surface("top", (0,), rng.uniform(0.05, 2.0, (3, 4)), np.ones((3, 4), bool), held_rise,
                   rng.uniform(0.0, 3.0, (3, 4)), sinks, joints)


def kept_nodes(surface, cells, bodies):
    """Node temperatures, heat into cells and into bodies, with every node kept: each node balanced on its own."""
    nodes = np.empty((3, 4))
    into_cells = np.empty((3, 4))
    into_bodies = np.zeros(2)
    for j in range(3):
        for i in range(4):
            to_cell = 1.0 / surface.half[j, i]
            links = [(to_cell, cells[j, i])]
            for sink in surface.sinks:
                g = np.zeros((3, 4))
                g[sink.where] = sink.g
                links.append((g[j, i], sink.rise))
            joint_g = []
            for joint in surface.joints:
                g = np.zeros((3, 4))
                g[joint.where] = joint.g
                joint_g.append(g[j, i])
                links.append((g[j, i], bodies[joint.body]))
            node = (surface.flux[j, i] + sum(g * t for g, t in links)) / sum(g for g, _ in links)
            if np.isfinite(surface.held[j, i]):
                node = surface.held[j, i]
            nodes[j, i] = node
            into_cells[j, i] = to_cell * (node - cells[j, i])
            into_bodies += [g * (node - t) for g, t in zip(joint_g, bodies, strict=True)]
    return nodes, into_cells, into_bodies


@pytest.mark.parametrize("held", [False, True])
def test_elimination_is_exact(held):
    rng = np.random.default_rng(4)
    surface = example(rng, held)
    cells, bodies = rng.uniform(-5, 40, (3, 4)), rng.uniform(10, 60, 2)
    nodes, into_cells, into_bodies = kept_nodes(surface, cells, bodies)

    assert np.allclose(surface.rise(Field(cells[None], bodies)), nodes)
    to_sink, heat = surface.cell_terms()
    flow = heat - to_sink * cells
    bodies_flow = np.zeros(2)
    for joint in surface.joints:
        to_cell, sink, reaching = surface.joint_terms(joint)
        flow[joint.where] += to_cell * (bodies[joint.body] - cells[joint.where])
        bodies_flow[joint.body] += reaching - sink * bodies[joint.body]
        bodies_flow[joint.body] -= np.sum(to_cell * (bodies[joint.body] - cells[joint.where]))
    between = surface.bodies_term(*surface.joints)
    bodies_flow += between * (bodies[::-1] - bodies)
    assert np.allclose(flow, into_cells)
    assert np.allclose(bodies_flow, into_bodies)


@pytest.mark.parametrize("held", [False, True])
def test_what_enters_a_surface_leaves_it(held):
    rng = np.random.default_rng(5)
    surface = example(rng, held)
    cells, bodies = rng.uniform(-5, 40, (3, 4)), rng.uniform(10, 60, 2)
    _, into_cells, into_bodies = kept_nodes(surface, cells, bodies)
    out = sum(surface.heat_out(Field(cells[None], bodies)).values())
    assert out == pytest.approx(surface.flux.sum() - into_cells.sum() - into_bodies.sum())
