"""Writes files with NumPy, SciPy and h5py, for the readers to be tested against."""
import gzip
import sys

import h5py
import numpy as np
import scipy.io
import scipy.sparse

folder = sys.argv[1] + "/"


def grid(rows, columns):
    """Element [i, j] is 10 i + j + 0.25: exact in single precision, too."""
    return np.add.outer(10.0 * np.arange(rows), np.arange(columns)) + 0.25


real = grid(3, 4)
pairs = real + 1j * (real + 100)
np.save(folder + "real.npy", real)
np.save(folder + "fortran.npy", np.asfortranarray(real))
np.save(folder + "fortran3.npy", np.asfortranarray(np.arange(24.0).reshape(2, 3, 4)))
np.save(folder + "single.npy", real.astype("<f4"))
np.save(folder + "big_endian.npy", real.astype(">f8"))
np.save(folder + "big_single.npy", real.astype(">f4"))
np.save(folder + "complex.npy", pairs)
np.save(folder + "complex_single.npy", pairs.astype("<c8"))
np.save(folder + "complex_big.npy", np.asfortranarray(pairs.astype(">c16")))
for kind in ("i1", "u1", "<i2", ">u2", "<i4", ">i4", "<u4", "<i8", ">i8", "<u8"):
    np.save(folder + "int_" + kind.strip("<>") + "_" + str(kind[0] == ">") + ".npy",
            np.arange(6).astype(kind).reshape(2, 3))
np.save(folder + "large.npy", np.array([2**53 + 1, -1]))
np.save(folder + "too_large.npy", np.array([2**63 + 5], dtype="u8"))
np.save(folder + "bool.npy", np.array([True, False, True]))
np.save(folder + "scalar.npy", np.float64(2.5))
np.save(folder + "empty.npy", np.zeros((0, 5)))
np.save(folder + "object.npy", np.array([1, "a"], dtype=object), allow_pickle=True)
np.save(folder + "structure.npy", np.zeros(3, dtype=[("a", "f8"), ("b", "i4")]))
np.save(folder + "string.npy", np.array(["a", "bc"]))
np.save(folder + "half.npy", np.zeros(3, dtype="f2"))
np.save(folder + "extended.npy", np.zeros(3, dtype=np.longdouble))
np.save(folder + "not_finite.npy", np.array([[1.0, np.nan], [np.inf, 0.0]]))
for version in ((1, 0), (2, 0), (3, 0)):
    with open(folder + "version%d.npy" % version[0], "wb") as file:
        np.lib.format.write_array(file, real, version=version)
np.savez(folder + "plain.npz", E=real, psi=pairs, n=np.arange(3))
np.savez_compressed(folder + "packed.npz", E=real, psi=pairs, zeros=np.zeros(100000))
np.savez(folder + "objects.npz", a=np.array([None], dtype=object))

random = np.random.default_rng(20261201)


def sparse(rows, columns, is_complex):
    matrix = scipy.sparse.random(rows, columns, density=0.2, random_state=random, format="coo")
    if is_complex:
        matrix = matrix + 1j * scipy.sparse.random(rows, columns, density=0.2,
                                                   random_state=random, format="coo")
    return scipy.sparse.coo_matrix(matrix)


def both(name, matrix):
    """A sparse matrix in every file format, and as a dense NPY file."""
    np.save(folder + name + ".npy", matrix.toarray())
    scipy.io.mmwrite(folder + name + ".mtx", matrix)
    scipy.io.mmwrite(folder + name + "_array.mtx", matrix.toarray())
    with open(folder + name + ".mtx", "rb") as file, gzip.open(folder + name + ".mtx.gz", "wb") as packed:
        packed.write(file.read())
    for format in ("csr", "csc", "coo"):
        scipy.sparse.save_npz(folder + name + "_" + format + ".npz", matrix.asformat(format),
                              compressed=format != "coo")


general = sparse(20, 13, False)
square = sparse(17, 17, True)
both("general", general)
both("complex_general", square)
half = sparse(15, 15, False)
both("symmetric", (half + half.T).tocoo())
both("hermitian", (square + square.conj().T).tocoo())
both("skew", (half - half.T).tocoo())
both("integer", scipy.sparse.coo_matrix(np.arange(12).reshape(3, 4) % 5))
scipy.io.mmwrite(folder + "pattern.mtx", general, field="pattern")
scipy.sparse.save_npz(folder + "repeated.npz", scipy.sparse.coo_matrix(
    ([1.0, 2.0, 4.0], ([1, 0, 1], [1, 2, 1])), shape=(3, 3)))
scipy.sparse.save_npz(folder + "blocks.npz", scipy.sparse.bsr_matrix(np.ones((4, 4))))

with h5py.File(folder + "all.h5", "w") as file:
    file["E"] = real
    file["group/inner/single"] = real.astype("f4")
    file["big"] = real.astype(">f8")
    file["n"] = np.arange(6).reshape(2, 3)
    file["large"] = np.array([2**53 + 1, -1])
    file["flag"] = np.array([True, False])
    file["scalar"] = 2.5
    file["psi"] = pairs
    file["psi_single"] = pairs.astype("c8")
    file["named"] = np.array([(1.0, 2.0), (3.0, 4.0)], dtype=[("Real", "f8"), ("Imaginary", "f8")])
    file["other"] = np.array([(1.0, 2.0)], dtype=[("x", "f8"), ("y", "f8")])
    file["split_re"] = real
    file["split_im"] = real + 100
    file["word"] = "text"
    file["nothing"] = h5py.Empty("f8")
    file["none"] = np.zeros((0, 5))
    file.create_dataset("packed", data=np.arange(300000.0).reshape(100, 3000), chunks=(7, 900),
                        compression="gzip", shuffle=True)
    file.create_dataset("wide", data=np.arange(5000000.0).reshape(1, 1, 5000000), chunks=True)
    file.create_dataset("claimed", shape=(10**9, 10**9), chunks=(10, 10), dtype="f8")
    file.create_dataset("chunk", shape=(2**28,), chunks=(2**28,), dtype="f8")
with h5py.File(folder + "small.h5", "w") as file:
    file["E"] = np.arange(4.0)
