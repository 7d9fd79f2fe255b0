using System.IO.Compression;
using StreamLogit.Pipeline.Options;
using ZstdSharp;

namespace StreamLogit.Pipeline.Files;

/// <summary>The bytes of a recording, opened by its name. Here, and only here, a name decides how the bytes are unpacked.</summary>
internal sealed class RecordingFile : IDisposable
{
    /// <summary>The name of standard input.</summary>
    public const string StandardInput = "-";

    private readonly Stream _raw;

    // Otherwise a gzip file that was cut off is taken for one that ends there.
    static RecordingFile() => AppContext.SetSwitch("System.IO.Compression.UseStrictValidation", true);

    private RecordingFile(string path, string origin, Stream raw, bool canBlock)
    {
        Path = path;
        Origin = origin;
        _raw = raw;
        Content = RecordingFormats.PackingOfName(path) switch
        {
            RecordingPacking.Gzip => new GZipStream(raw, CompressionMode.Decompress),
            RecordingPacking.Zstandard => new DecompressionStream(raw),
            _ => raw,
        };
        CanBlock = canBlock;
    }

    /// <summary>The name under which it was opened.</summary>
    public string Path { get; }

    /// <summary>How positions name it.</summary>
    public string Origin { get; }

    /// <summary>The bytes of its records.</summary>
    public Stream Content { get; }

    /// <summary>
    /// Whether a read may wait for another program, as on a pipe. Such bytes come once: they cannot be read again from a position.
    /// </summary>
    public bool CanBlock { get; }

    /// <summary>Whether the bytes are unpacked on the way, so that the end, once reached, is the end.</summary>
    public bool IsPacked => Content != _raw;

    /// <summary>Bytes taken from the disk so far, or null for a pipe, where only the reader can count them.</summary>
    public long? RawBytesRead => _raw.CanSeek ? _raw.Position : null;

    /// <summary>Bytes on the disk now, or null for a pipe.</summary>
    public long? RawLength => _raw.CanSeek ? _raw.Length : null;

    /// <summary>Opens the recording of that name; <c>-</c> is standard input.</summary>
    public static RecordingFile Open(string path)
    {
        if (path == StandardInput) return OfPipe("stdin", Console.OpenStandardInput());
        try
        {
            var file = new FileStream(path, FileMode.Open, FileAccess.Read,
                FileShare.ReadWrite | FileShare.Delete, bufferSize: 0, FileOptions.SequentialScan);
            return new RecordingFile(path, System.IO.Path.GetFileName(path), file, canBlock: !file.CanSeek);
        }
        catch (Exception e) when (e is FileNotFoundException or DirectoryNotFoundException)
        {
            throw new InvalidRecordingException($"The recording {path} does not exist.", e);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException or ArgumentException or NotSupportedException)
        {
            throw new InvalidRecordingException($"The recording {path} cannot be opened: {e.Message}", e);
        }
    }

    /// <summary>Takes bytes that another program sends.</summary>
    public static RecordingFile OfPipe(string origin, Stream pipe) => new(origin, origin, pipe, canBlock: true);

    /// <summary>Goes from the beginning to a byte of the content: by seeking, or by reading up to it where the content is unpacked on the way.</summary>
    /// <returns>Whether the content reaches that far.</returns>
    public bool TrySkipTo(long offset)
    {
        if (Content.CanSeek)
        {
            Content.Position = offset;
            return Content.Length >= offset;
        }
        byte[] skipped = new byte[1 << 16];
        while (offset > 0)
        {
            int read = Content.Read(skipped.AsSpan(0, (int)Math.Min(skipped.Length, offset)));
            if (read == 0) return false;
            offset -= read;
        }
        return true;
    }

    public void Dispose()
    {
        Content.Dispose();
        _raw.Dispose();
    }
}
