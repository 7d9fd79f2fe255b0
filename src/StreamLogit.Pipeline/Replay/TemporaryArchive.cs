using System.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Pipeline.Replay;

/// <summary>
/// The archive of an engine that keeps no state: a temporary file, made when the first block comes and gone when the archive is.
/// A block has a place whose length is a power of two; places of removed blocks are used again.
/// </summary>
public sealed class TemporaryArchive : IBlockArchive, IDisposable
{
    private readonly Dictionary<(string Part, long Number), (long Offset, int Length)> _blocks = [];
    private readonly Dictionary<int, Stack<long>> _freePlaces = [];
    private FileStream? _file;
    private long _end;

    /// <inheritdoc/>
    public void Write(string part, long number, ReadOnlySpan<byte> bytes)
    {
        Remove(part, number);
        long offset = PlaceFor(bytes.Length);
        try
        {
            _file ??= new FileStream(
                Path.Combine(Path.GetTempPath(), $"streamlogit-{Guid.NewGuid():N}.tmp"), FileMode.CreateNew, FileAccess.ReadWrite, FileShare.None,
                bufferSize: 0, FileOptions.DeleteOnClose);
            RandomAccess.Write(_file.SafeFileHandle, bytes, offset);
        }
        catch (IOException e)
        {
            throw StorageFault.OfFile(_file?.Name ?? Path.GetTempPath(), e);
        }
        _blocks[(part, number)] = (offset, bytes.Length);
    }

    /// <inheritdoc/>
    public int Read(string part, long number, ref byte[] target)
    {
        if (!_blocks.TryGetValue((part, number), out var block)) throw new InvalidStateException($"no block {number} of {part} is archived");
        if (target.Length < block.Length) target = new byte[block.Length];
        for (int read = 0; read < block.Length;)
        {
            int count = RandomAccess.Read(_file!.SafeFileHandle, target.AsSpan(read, block.Length - read), block.Offset + read);
            if (count == 0) throw new InvalidStateException($"{_file.Name} was cut short");
            read += count;
        }
        return block.Length;
    }

    /// <inheritdoc/>
    public void Remove(string part, long number)
    {
        if (!_blocks.Remove((part, number), out var block)) return;
        int size = SizeOf(block.Length);
        if (!_freePlaces.TryGetValue(size, out var free)) _freePlaces[size] = free = [];
        free.Push(block.Offset);
    }

    /// <inheritdoc/>
    public IEnumerable<long> Numbers(string part) => _blocks.Keys.Where(k => k.Part == part).Select(k => k.Number).Order();

    /// <inheritdoc/>
    public void Dispose() => _file?.Dispose();

    private long PlaceFor(int length)
    {
        int size = SizeOf(length);
        if (_freePlaces.TryGetValue(size, out var free) && free.TryPop(out long offset)) return offset;
        offset = _end;
        _end += size;
        return offset;
    }

    private static int SizeOf(int length) => (int)BitOperations.RoundUpToPowerOf2((uint)Math.Max(length, 1));
}
