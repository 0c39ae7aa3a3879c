"""A batch on the executor of a Dask cluster on this machine, where Dask is installed."""

import importlib.util

import pytest

import rheo


@pytest.fixture
def cluster_executor():
    if importlib.util.find_spec("distributed") is None:
        pytest.skip("Dask's scheduler is not among the dependencies and is not installed here")
    from distributed import Client, LocalCluster

    with (
        LocalCluster(n_workers=2, threads_per_worker=1, dashboard_address=None) as cluster,
        Client(cluster) as client,
        client.get_executor() as executor,
    ):
        yield executor


@pytest.mark.filterwarnings("default")
def test_a_cluster_gives_what_this_machine_gives(lots, cluster_executor):
    files = sorted(lots.iterdir())
    there = rheo.batch(files, reference=lots / "lot0.csv", executor=cluster_executor)
    here = rheo.batch(files, reference=lots / "lot0.csv", workers=1)
    assert there.rows == here.rows
