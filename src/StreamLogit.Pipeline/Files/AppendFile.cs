using System.Buffers;

namespace StreamLogit.Pipeline.Files;

/// <summary>A file that grows by whole batches and can be cut back to the length of a commit.</summary>
internal sealed class AppendFile(string path, string name) : IDisposable
{
    private const int FullBytes = 1 << 18;

    private FileStream? _file;

    /// <summary>What is to be written next.</summary>
    public ArrayBufferWriter<byte> Buffer { get; } = new(FullBytes + (1 << 14));

    private FileStream File => _file ?? throw new InvalidOperationException($"The {name} were not started.");

    /// <summary>Opens the file, at the committed length, or empty where nothing was ever committed.</summary>
    public void Start(long? committedBytes)
    {
        try
        {
            _file?.Dispose();
            Buffer.ResetWrittenCount();
            if (Path.GetDirectoryName(Path.GetFullPath(path)) is { } folder) Directory.CreateDirectory(folder);
            _file = new FileStream(path, FileMode.OpenOrCreate, FileAccess.Write, FileShare.Read | FileShare.Delete, bufferSize: 0);
            Cut(_file, committedBytes);
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw StorageFault.OfFile(path, e);
        }
    }

    /// <summary>Ends a line, and hands the buffer on when it is full.</summary>
    public void EndLine()
    {
        Buffer.Write("\n"u8);
        if (Buffer.WrittenCount >= FullBytes) Send();
    }

    /// <summary>Hands the buffer to the operating system, so that whoever follows the file sees it.</summary>
    public void Send()
    {
        if (Buffer.WrittenCount == 0) return;
        try
        {
            File.Write(Buffer.WrittenSpan);
        }
        // A file that grows beyond what its file system, or a limit of the process, allows is said to be an argument out of range.
        catch (Exception e) when (e is IOException or ArgumentOutOfRangeException)
        {
            throw StorageFault.OfFile(path, e);
        }
        Buffer.ResetWrittenCount();
    }

    /// <summary>Has the disk take all that was written.</summary>
    /// <returns>The length of the file.</returns>
    public long Flush()
    {
        Send();
        try
        {
            File.Flush(flushToDisk: true);
        }
        catch (IOException e)
        {
            throw StorageFault.OfFile(path, e);
        }
        return File.Position;
    }

    public void Dispose() => _file?.Dispose();

    private void Cut(FileStream file, long? committedBytes)
    {
        if (committedBytes is not long committed)
        {
            if (file.Length > 0)
                throw new PipelineException(
                    $"{path} already holds {file.Length} bytes that the state knows nothing of. Move it away, or put back the state folder that belongs to it.");
            return;
        }
        if (file.Length < committed)
            throw new PipelineException(
                $"{path} holds {file.Length} bytes, but {committed} were committed: it was moved, cut or replaced. "
                + "Put it back, or begin with a new state folder.");
        if (file.Length > committed) file.SetLength(committed);
        file.Position = committed;
    }
}
