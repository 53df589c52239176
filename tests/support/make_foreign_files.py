#!/usr/bin/env python3
"""Writes stacks of a known pattern in every input format, by libraries that are not ours.

Usage: make_foreign_files.py FOLDER

Pixel (image i, row y, column x) has the pattern p = 7 i + 3 y + x, at most 102, and is stored as scale * p + offset.
FOLDER/manifest.csv says for every file what a reader must find in it; FOLDER/refused.csv names files that must be
refused and words that the sentence must contain.
"""
import csv
import pathlib
import struct
import sys
import zlib

import h5py
import mrcfile
import numpy as np
import tifffile
from PIL import Image

IMAGES, ROWS, COLUMNS = 3, 24, 20
PATTERN = (7 * np.arange(IMAGES)[:, None, None] + 3 * np.arange(ROWS)[None, :, None]
           + np.arange(COLUMNS)[None, None, :])
LUMA = (0.299, 0.587, 0.114)

folder = pathlib.Path(sys.argv[1])
folder.mkdir(parents=True, exist_ok=True)
manifest = []
refused = []


def expect(name, images=IMAGES, scale=1.0, offset=0.0, tolerance=0.0, pixel_size=0.0, unit="", channel="", remark="",
           rows=ROWS, columns=COLUMNS):
    manifest.append(dict(file=name, images=images, rows=rows, columns=columns, scale=repr(float(scale)),
                         offset=repr(float(offset)), tolerance=repr(float(tolerance)),
                         pixel_size=repr(float(pixel_size)), unit=unit, channel=channel, remark=remark))


def refuse(name, words, data=None):
    if data is not None:
        (folder / name).write_bytes(data)
    refused.append(dict(file=name, words=words))


def stored(dtype):
    """The pattern in a type, with its scale and offset: negative, fractional or large where the type can."""
    kind, size = np.dtype(dtype).kind, np.dtype(dtype).itemsize
    scale, offset = {"u1": (2, 3), "i1": (1, -60), "u2": (600, 5), "i2": (300, -16000), "u4": (40_000_000, 7),
                     "i4": (20_000_000, -1_000_000_000), "u8": (1 << 40, 0), "i8": (1 << 40, -(1 << 45)),
                     "f2": (0.25, -10), "f4": (0.375, -11.5), "f8": (0.1, 1e6)}[f"{kind}{size}"]
    if kind == "f":
        return (PATTERN * scale + offset).astype(dtype), scale, offset
    return (PATTERN.astype("i8") * scale + offset).astype(dtype), scale, offset


TYPES = ["u1", "i1", "u2", "i2", "u4", "i4", "u8", "i8", "f2", "f4", "f8"]
# scale * p + offset is exact in every type but f8, where it is computed once here and once in the test.
ROUNDING = {"f8": 1e-9}


def write_npy():
    for version in (1, 2, 3):
        for kind in TYPES:
            for order in "<>":
                for fortran in (False, True):
                    array, scale, offset = stored(order + kind)
                    name = f"v{version}_{'le' if order == '<' else 'be'}_{kind}_{'f' if fortran else 'c'}.npy"
                    with open(folder / name, "wb") as file:
                        np.lib.format.write_array(file, np.asfortranarray(array) if fortran else array,
                                                  version=(version, 0))
                    expect(name, scale=scale, offset=offset, tolerance=ROUNDING.get(kind, 0))
    np.save(folder / "one_image.npy", PATTERN[1])
    expect("one_image.npy", images=1, offset=7)
    np.save(folder / "one_image_fortran.npy", np.asfortranarray(PATTERN[1]))
    expect("one_image_fortran.npy", images=1, offset=7)
    np.save(folder / "boolean.npy", np.ones((2, ROWS, COLUMNS), bool))
    expect("boolean.npy", images=2, scale=0, offset=1)
    whole = (folder / "v1_le_f4_c.npy").read_bytes()
    refuse("truncated.npy", "the file has only", whole[:-1])
    (folder / "trailing.npy").write_bytes(whole + b"xyz")
    expect("trailing.npy", scale=0.375, offset=-11.5, remark="3 bytes more")
    refuse("huge.npy", "the file has only", whole.replace(b"(3, 24, 20)", b"(3,99999,9)"))
    refuse("overflow.npy", "the file has only",
           b"\x93NUMPY\x01\x00" + struct.pack("<H", 118)
           + b"{'descr': '<f8', 'fortran_order': True, 'shape': (4294967296, 4294967296, 4294967296), }".ljust(117)
           + b"\n")
    np.save(folder / "complex.npy", PATTERN.astype("c8"))
    refuse("complex.npy", "c8")
    np.save(folder / "four.npy", np.zeros((2, 3, 4, 5)))
    refuse("four.npy", "4 dimensions")
    np.save(folder / "empty.npy", np.zeros((0, 8, 8)))
    refuse("empty.npy", "no pixel")


def write_mrc():
    for mode, kind in ((0, "i1"), (1, "i2"), (2, "f4"), (6, "u2"), (12, "f2")):
        for order in "<>":
            array, scale, offset = stored(order + kind)
            name = f"mode{mode}_{'le' if order == '<' else 'be'}.mrcs"
            with mrcfile.new(folder / name, overwrite=True) as file:
                file.set_data(array)
                file.set_image_stack()
                file.voxel_size = 1.35
            if kind == "i1" and order == ">":
                # Bytes have no order of their own, so mrcfile leaves the header in the host's.
                header = np.frombuffer((folder / name).read_bytes()[:1024], mrcfile.dtypes.HEADER_DTYPE).byteswap()
                header["machst"] = [0x11, 0x11, 0, 0]
                (folder / name).write_bytes(header.tobytes() + array.tobytes())
            with mrcfile.open(folder / name) as file:
                assert int(file.header.mode) == mode and file.header.machst[0] == (0x11 if order == ">" else 0x44)
            expect(name, scale=scale, offset=offset, pixel_size=1.35, unit="angstrom")
    whole = bytearray((folder / "mode2_le.mrcs").read_bytes())
    facts = dict(scale=0.375, offset=-11.5, pixel_size=1.35, unit="angstrom")

    extended = bytearray(whole)
    extended[92:96] = struct.pack("<i", 2048)
    (folder / "extended.mrc").write_bytes(extended[:1024] + bytes(range(256)) * 8 + extended[1024:])
    expect("extended.mrc", **facts)

    with mrcfile.new(folder / "volume.map", overwrite=True) as file:
        file.set_data(stored("<f4")[0])
        file.voxel_size = 1.35
    expect("volume.map", remark="a volume", **facts)
    with mrcfile.new(folder / "single.mrc", overwrite=True) as file:
        file.set_data(stored("<f4")[0][0])
    expect("single.mrc", images=1, scale=0.375, offset=-11.5)

    for name, order in (("unstamped_le.mrc", "le"), ("unstamped_be.mrc", "be")):
        blank = bytearray((folder / f"mode2_{order}.mrcs").read_bytes())
        blank[208:216] = bytes(8)
        (folder / name).write_bytes(blank)
        expect(name, **facts)
    wrong = bytearray((folder / "mode2_be.mrcs").read_bytes())
    wrong[212:214] = b"\x44\x44"
    (folder / "wrong_stamp.mrc").write_bytes(wrong)
    expect("wrong_stamp.mrc", remark="contradicts", **facts)
    (folder / "longer.mrc").write_bytes(whole + b"1234567")
    expect("longer.mrc", remark="7 bytes more", **facts)

    def lie(offset, *numbers):
        liar = bytearray(whole)
        liar[offset:offset + 4 * len(numbers)] = struct.pack(f"<{len(numbers)}i", *numbers)
        return liar

    refuse("truncated.mrc", "the file has only", whole[:-1])
    refuse("sections_lie.mrc", "the file has only", lie(8, 4))
    refuse("absurd.mrc", "the file has only", lie(0, 1000000, 1000000, 2000000000))
    refuse("negative.mrc", "makes no sense", lie(0, -20))
    refuse("complex_mode.mrc", "mode 4", lie(12, 4))
    refuse("extended_lies.mrc", "extended header", lie(92, 1 << 30))
    refuse("short.mrc", "header alone", whole[:500])


def plain_tiff(array, bits, big, photometric=1, pages=1, extra_tags=(), offset_of_next=None):
    """A TIFF file of one page made by hand, for what tifffile cannot write: packed samples."""
    order = ">" if big else "<"
    rows, columns = array.shape
    lines = []
    for row in array:
        text = "".join(format(int(value), f"0{bits}b") for value in row)
        text += "0" * (-len(text) % 8)
        lines.append(int(text, 2).to_bytes(len(text) // 8, "big"))
    pixels = b"".join(lines)
    tags = sorted([(256, 3, columns), (257, 3, rows), (258, 3, bits), (259, 3, 1), (262, 3, photometric), (273, 4, 8),
                   (277, 3, 1), (278, 3, rows), (279, 4, len(pixels)), *extra_tags])
    entries = b""
    for tag, kind, value in tags:
        packed = struct.pack(order + "HH", value, 0) if kind == 3 else struct.pack(order + "I", value)
        entries += struct.pack(order + "HHI", tag, kind, 1) + packed
    start = 8 + len(pixels) + len(pixels) % 2
    return ((b"MM\0\x2A" if big else b"II\x2A\0") + struct.pack(order + "I", start) + pixels.ljust(start - 8, b"\0")
            + struct.pack(order + "H", len(tags)) + entries + struct.pack(order + "I", offset_of_next or 0))


def write_tiff():
    for kind in TYPES:
        for order in "<>":
            array, scale, offset = stored(order + kind)
            for style, options in (("strips", dict(rowsperstrip=5)), ("tiles", dict(tile=(16, 16))),
                                   ("big", dict(bigtiff=True)), ("zip", dict(compression="zlib"))):
                name = f"{kind}_{'le' if order == '<' else 'be'}_{style}.tif"
                tifffile.imwrite(folder / name, array, byteorder=order, photometric="minisblack", metadata=None,
                                 **options)
                expect(name, scale=scale, offset=offset, tolerance=ROUNDING.get(kind, 0))

    colours = (PATTERN[..., None] + np.array([0, 40, 80])).astype("u1")
    for style, array, options in (("contiguous", colours, dict(planarconfig="contig")),
                                  ("planar", np.moveaxis(colours, -1, 1), dict(planarconfig="separate")),
                                  ("planar_tiles", np.moveaxis(colours, -1, 1),
                                   dict(planarconfig="separate", tile=(16, 16)))):
        name = f"rgb_{style}.tif"
        tifffile.imwrite(folder / name, array, photometric="rgb", metadata=None, **options)
        expect(name, offset=0.587 * 40 + 0.114 * 80, tolerance=1e-12, remark="luma")
        expect(name, offset=80, channel="2", remark="channel 2")
    tifffile.imwrite(folder / "rgb16.tif", colours.astype("u2") * 100, photometric="rgb", metadata=None)
    expect("rgb16.tif", scale=100, offset=(0.587 * 40 + 0.114 * 80) * 100, tolerance=1e-9, remark="luma")
    with_alpha = np.concatenate([colours, np.full_like(colours[..., :1], 200)], axis=-1)
    tifffile.imwrite(folder / "rgba.tif", with_alpha, photometric="rgb", extrasamples=["unassalpha"], metadata=None)
    expect("rgba.tif", offset=0.587 * 40 + 0.114 * 80, tolerance=1e-12, remark="alpha ignored")
    expect("rgba.tif", scale=0, offset=200, channel="3")
    tifffile.imwrite(folder / "five_channels.tif", np.repeat(PATTERN[..., None], 5, -1).astype("u2"),
                     photometric="minisblack", planarconfig="contig", metadata=None)
    refuse("five_channels.tif", "5 channels")
    expect("five_channels.tif", channel="4")
    tifffile.imwrite(folder / "white.tif", PATTERN.astype("u1"), photometric="miniswhite", metadata=None)
    expect("white.tif", remark="smallest value means white")

    grey = [Image.fromarray(p.astype("u1")) for p in PATTERN]
    for compression in ("tiff_lzw", "packbits", "tiff_adobe_deflate"):
        grey[0].save(folder / f"{compression}.tif", save_all=True, append_images=grey[1:], compression=compression)
        expect(f"{compression}.tif")
    grey[0].save(folder / "jpeg_in_tiff.tif", save_all=True, append_images=grey[1:], compression="jpeg", quality=100)
    expect("jpeg_in_tiff.tif", tolerance=3)
    Image.fromarray((np.indices((ROWS, COLUMNS)).sum(0) < 1000)).save(folder / "fax.tif", compression="group4")
    expect("fax.tif", images=1, scale=0, offset=1)
    palette = grey[0].convert("P")
    palette.putpalette([channel for i in range(256) for channel in (i, min(i + 40, 255), min(i + 80, 255))])
    palette.save(folder / "palette.tif")
    expect("palette.tif", images=1, offset=0.587 * 40 + 0.114 * 80, tolerance=1e-12, remark="palette")
    expect("palette.tif", images=1, offset=40, channel="1", tolerance=1e-12)

    for big in (False, True):
        ending = "be" if big else "le"
        for bits, scale, offset in ((12, 40, 5), (7, 1, 0), (4, 0, 9), (1, 0, 1)):
            (folder / f"{bits}bits_{ending}.tif").write_bytes(plain_tiff(PATTERN[0] * scale + offset, bits, big))
            expect(f"{bits}bits_{ending}.tif", images=1, scale=scale, offset=offset)

    array = stored("f4")[0]
    facts = dict(scale=0.375, offset=-11.5)
    tifffile.imwrite(folder / "centimetre.tif", array, photometric="minisblack", metadata=None,
                     resolution=(40000, 40000), resolutionunit="centimeter")
    expect("centimetre.tif", pixel_size=0.25, unit="micrometre", **facts)
    tifffile.imwrite(folder / "inch.tif", array, photometric="minisblack", metadata=None, resolution=(25400, 25400),
                     resolutionunit="inch")
    expect("inch.tif", pixel_size=1, unit="micrometre", **facts)
    tifffile.imwrite(folder / "print.tif", array, photometric="minisblack", metadata=None, resolution=(300, 300),
                     resolutionunit="inch")
    expect("print.tif", pixel_size=84.66667, unit="micrometre", remark="usual setting for print", **facts)
    tifffile.imwrite(folder / "oblong.tif", array, photometric="minisblack", metadata=None, resolution=(40000, 20000),
                     resolutionunit="centimeter")
    expect("oblong.tif", pixel_size=0.25, unit="micrometre", remark="not square", **facts)
    tifffile.imwrite(folder / "ome.tif", array, ome=True, photometric="minisblack",
                     metadata=dict(axes="TYX", PhysicalSizeX=0.11, PhysicalSizeXUnit="nm", PhysicalSizeY=0.11,
                                   PhysicalSizeYUnit="nm"))
    expect("ome.tif", pixel_size=0.11, unit="nanometre", **facts)
    tifffile.imwrite(folder / "ome_default.tif", array, ome=True, photometric="minisblack",
                     metadata=dict(axes="TYX", PhysicalSizeX=0.325))
    expect("ome_default.tif", pixel_size=0.325, unit="micrometre", **facts)
    for name, truncate in (("imagej.tif", False), ("imagej_one_page.tif", True)):
        tifffile.imwrite(folder / name, array, imagej=True, resolution=(4, 4), truncate=truncate,
                         metadata=dict(axes="TYX", unit="um"))
        expect(name, pixel_size=0.25, unit="micrometre", **facts)
    with tifffile.TiffWriter(folder / "pyramid.tif") as file:
        for page in array:
            file.write(page, photometric="minisblack", metadata=None)
            file.write(page[::2, ::2], photometric="minisblack", metadata=None, subfiletype=1)
    expect("pyramid.tif", remark="3 pages are smaller copies", **facts)

    whole = (folder / "f4_le_strips.tif").read_bytes()
    refuse("cut_before_directory.tif", "truncated", whole[:100])
    refuse("header_only.tif", "truncated", b"II\x2A\0\x08\0\0\0")
    refuse("no_directory.tif", "holds no image", b"II\x2A\0\0\0\0\0")
    refuse("stub.tif", "header alone", b"II\x2A\0\x08")
    refuse("absurd.tif", "the file has only", plain_tiff(PATTERN[0], 8, False).replace(
        struct.pack("<HHIHH", 256, 3, 1, COLUMNS, 0), struct.pack("<HHII", 256, 4, 1, 1 << 30)).replace(
        struct.pack("<HHIHH", 257, 3, 1, ROWS, 0), struct.pack("<HHII", 257, 4, 1, 1 << 30)).replace(
        struct.pack("<HHIHH", 278, 3, 1, ROWS, 0), struct.pack("<HHII", 278, 4, 1, 1 << 30)))
    refuse("strange_bits.tif", "20 bits", plain_tiff(PATTERN[0], 20, False))
    tifffile.imwrite(folder / "complex.tif", PATTERN.astype("c8"), metadata=None)
    refuse("complex.tif", "sample format 6")
    # A chain that comes back to its first page would never end for a reader that does not look.
    looped = plain_tiff(PATTERN[0], 8, False)
    start = struct.unpack("<I", looped[4:8])[0]
    (folder / "looped.tif").write_bytes(looped[:-4] + struct.pack("<I", start))


def png_chunk(kind, data):
    return struct.pack(">I", len(data)) + kind + data + struct.pack(">I", zlib.crc32(kind + data))


def plain_png(array, bits, colour_type, extra=b""):
    rows, columns = array.shape[:2]
    lines = b"".join(b"\0" + row.astype(">u2" if bits == 16 else "u1").tobytes() for row in array)
    header = struct.pack(">IIBBBBB", columns, rows, bits, colour_type, 0, 0, 0)
    return (b"\x89PNG\r\n\x1a\n" + png_chunk(b"IHDR", header) + extra + png_chunk(b"IDAT", zlib.compress(lines))
            + png_chunk(b"IEND", b""))


EXIF = b"MM\0\x2A\0\0\0\x08\0\x01" + struct.pack(">HHIHH", 274, 3, 1, 6, 0) + b"\0\0\0\0"


def write_png():
    page = PATTERN[0]
    colours = page[..., None] + np.array([0, 40, 80])
    luma = 0.587 * 40 + 0.114 * 80
    Image.fromarray(page.astype("u1")).save(folder / "grey8.png")
    expect("grey8.png", images=1)
    Image.fromarray((page * 600).astype("u2")).save(folder / "grey16.png")
    expect("grey16.png", images=1, scale=600)
    Image.fromarray(colours.astype("u1")).save(folder / "rgb8.png")
    expect("rgb8.png", images=1, offset=luma, tolerance=1e-12, remark="luma")
    for channel in range(3):
        expect("rgb8.png", images=1, offset=40 * channel, channel=str(channel))
    (folder / "rgb16.png").write_bytes(plain_png(colours * 300, 16, 2))
    expect("rgb16.png", images=1, scale=300, offset=300 * luma, tolerance=1e-9, remark="luma")
    alpha = np.full((ROWS, COLUMNS, 1), 77)
    Image.fromarray(np.concatenate([colours, alpha], -1).astype("u1")).save(folder / "rgba8.png")
    expect("rgba8.png", images=1, offset=luma, tolerance=1e-12, remark="alpha ignored")
    expect("rgba8.png", images=1, scale=0, offset=77, channel="3")
    Image.fromarray(np.concatenate([page[..., None], alpha], -1).astype("u1"), "LA").save(folder / "grey_alpha.png")
    expect("grey_alpha.png", images=1, remark="alpha ignored")
    expect("grey_alpha.png", images=1, scale=0, offset=77, channel="1")
    palette = Image.fromarray(page.astype("u1")).convert("P")
    palette.putpalette([channel for i in range(256) for channel in (i, min(i + 40, 255), min(i + 80, 255))])
    palette.save(folder / "palette.png", transparency=3)
    expect("palette.png", images=1, offset=luma, tolerance=1e-12, remark="luma")
    Image.fromarray(np.ones((ROWS, COLUMNS), bool)).save(folder / "bilevel.png")
    expect("bilevel.png", images=1, scale=0, offset=255)
    (folder / "turned.png").write_bytes(plain_png(page, 8, 0, png_chunk(b"eXIf", EXIF)))
    expect("turned.png", images=1, remark="EXIF orientation 6 is ignored")
    # An ancillary chunk that libpng would complain about on the standard error stream.
    (folder / "bad_profile.png").write_bytes(plain_png(page, 8, 0, png_chunk(b"iCCP", b"x\0\0nonsense")))
    expect("bad_profile.png", images=1)

    whole = (folder / "grey8.png").read_bytes()
    refuse("cut.png", "truncated", whole[:-30])
    damaged = bytearray(whole)
    damaged[60] ^= 0x55
    (folder / "damaged.png").write_bytes(damaged)
    refuse("absurd.png", "cannot hold", whole[:8] + png_chunk(
        b"IHDR", struct.pack(">IIBBBBB", 1 << 15, 1 << 15, 8, 0, 0, 0, 0)) + whole[33:])
    refuse("absurd_side.png", "2^20", whole[:8] + png_chunk(
        b"IHDR", struct.pack(">IIBBBBB", 1 << 30, 1, 8, 0, 0, 0, 0)) + whole[33:])
    refuse("stub.png", "truncated", whole[:20])


def write_jpeg():
    page = PATTERN[0].astype("u1")
    Image.fromarray(page).save(folder / "grey.jpg", quality=100)
    expect("grey.jpg", images=1, tolerance=2)
    Image.fromarray(page).save(folder / "progressive.jpg", quality=100, progressive=True)
    expect("progressive.jpg", images=1, tolerance=2)
    colours = (PATTERN[0][..., None] + np.array([0, 40, 80])).astype("u1")
    Image.fromarray(colours).save(folder / "colour.jpg", quality=100, subsampling=0)
    expect("colour.jpg", images=1, offset=0.587 * 40 + 0.114 * 80, tolerance=3, remark="luma")
    expect("colour.jpg", images=1, offset=80, channel="2", tolerance=4)
    exif = Image.Exif()
    exif[274] = 6
    Image.fromarray(page).save(folder / "turned.jpg", quality=100, exif=exif)
    expect("turned.jpg", images=1, tolerance=2, remark="EXIF orientation 6 is ignored")
    whole = (folder / "grey.jpg").read_bytes()
    (folder / "cut.jpg").write_bytes(whole[:-20])
    refuse("stub.jpg", "truncated", whole[:40])
    absurd = bytearray(whole)
    place = whole.index(b"\xff\xc0")
    absurd[place + 5:place + 9] = struct.pack(">HH", 30000, 30000)
    refuse("absurd.jpg", "cannot hold", bytes(absurd))
    absurd[place + 5:place + 9] = b"\xff\xff\xff\xff"
    refuse("absurd_side.jpg", "2^20", absurd)


def write_hdf5():
    for kind in TYPES:
        for order in "<>":
            array, scale, offset = stored(order + kind)
            name = f"{kind}_{'le' if order == '<' else 'be'}.h5"
            with h5py.File(folder / name, "w") as file:
                file.create_dataset("deep/er/stack", data=array)
                file["deep/er/stack"].attrs["pixel_size"] = 1.7
                file["deep/er/stack"].attrs["unit"] = "nm"
            facts = dict(scale=scale, offset=offset, tolerance=ROUNDING.get(kind, 0), pixel_size=1.7, unit="nanometre")
            expect(f"{name}::/deep/er/stack", **facts)
            expect(name, remark="/deep/er/stack", **facts)
    array = stored("f4")[0]
    facts = dict(scale=0.375, offset=-11.5)
    with h5py.File(folder / "many.h5", "w", userblock_size=512) as file:
        file.create_dataset("chunked", data=array, chunks=(2, 10, 7), compression="gzip", shuffle=True)
        file.create_dataset("flat", data=array[0])
        file.create_dataset("numbers", data=np.arange(5))
        file.create_dataset("words", data=np.array([[b"ab"]]))
        file.create_dataset("four", data=np.zeros((2, 2, 4, 4)))
        file.create_dataset("unfilled", shape=(10, 100, 100), dtype="f4")
        file.create_dataset("absurd", shape=(10, 1 << 20, 1 << 20), dtype="f4", chunks=(1, 8, 8))
        file["absurd"][0, :8, :8] = 1
        file.create_dataset("empty", shape=(0, 8, 8), dtype="f4")
        file.attrs["pixel_size"] = np.array([0.5, 0.5])
        file.attrs["unit"] = np.string_("um")
    for dataset, images in (("chunked", IMAGES), ("flat", 1)):
        expect(f"many.h5::/{dataset}", images=images, pixel_size=0.5, unit="micrometre", **facts)
    refuse("many.h5", "/chunked")
    refuse("many.h5::/nothing", "does not exist")
    refuse("many.h5::/numbers", "1 dimensions")
    refuse("many.h5::/words", "neither integers")
    refuse("many.h5::/four", "4 dimensions")
    refuse("many.h5::/unfilled", "never filled")
    refuse("many.h5::/absurd", "cannot hold")
    refuse("many.h5::/empty", "is empty")
    with h5py.File(folder / "group.h5", "w") as file:
        file.create_dataset("inner/images", data=array)
    refuse("group.h5::/inner", "is not a dataset")
    refuse("truncated.h5", "HDF5", (folder / "f4_le.h5").read_bytes()[:-500])
    refuse("grey8.png::/images", "not an HDF5 file")


def write_others():
    refuse("text.txt", "none of PNG", b"hello, this is no image\n")
    refuse("packed.mrc.gz", "gzip", b"\x1f\x8b\x08" + bytes(50))
    refuse("nothing.tif", "is empty", b"")
    refuse("missing.tif", "no such file")


for write in (write_npy, write_mrc, write_tiff, write_png, write_jpeg, write_hdf5, write_others):
    write()
for name, rows in (("manifest.csv", manifest), ("refused.csv", refused)):
    with open(folder / name, "w", newline="") as file:
        table = csv.DictWriter(file, fieldnames=list(rows[0]))
        table.writeheader()
        table.writerows(rows)
print(f"{len(manifest)} expectations and {len(refused)} refusals in {folder}")
