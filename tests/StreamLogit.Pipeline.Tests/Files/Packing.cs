using System.IO.Compression;
using ZstdSharp;

namespace StreamLogit.Pipeline.Tests.Files;

/// <summary>Packs files, in two members or frames one behind the other.</summary>
internal static class Packing
{
    public static void Pack(string path, byte[] content)
    {
        // Not written over: whoever has the old file open keeps it.
        File.Delete(path);
        using var file = File.Create(path);
        foreach (byte[] part in (byte[][])[content[..(content.Length / 3)], content[(content.Length / 3)..]])
        {
            using Stream packed = path.EndsWith(".gz", StringComparison.Ordinal)
                ? new GZipStream(file, CompressionLevel.Fastest, leaveOpen: true)
                : new CompressionStream(file, level: 3, leaveOpen: true);
            packed.Write(part);
        }
    }

    public static byte[] Unpack(string path)
    {
        using var file = File.OpenRead(path);
        using Stream content = path.EndsWith(".gz", StringComparison.Ordinal)
            ? new GZipStream(file, CompressionMode.Decompress)
            : new DecompressionStream(file);
        using var all = new MemoryStream();
        content.CopyTo(all);
        return all.ToArray();
    }
}
