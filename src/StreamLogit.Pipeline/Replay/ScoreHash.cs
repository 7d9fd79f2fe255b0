using System.Buffers.Binary;
using System.Security.Cryptography;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Replay;

/// <summary>
/// The SHA-256 over all scores in their order: of each, the UTF-8 bytes of the id, then the eight bytes of the probability
/// (IEEE 754 binary64, the lowest byte first). Equal hashes mean equal bits in every score.
/// </summary>
public sealed class ScoreHash : IScoreSink
{
    private readonly IncrementalHash _hash = IncrementalHash.CreateHash(HashAlgorithmName.SHA256);
    private byte[] _buffer = new byte[1 << 16];
    private int _buffered;
    private long _scores;

    /// <inheritdoc/>
    public string Name => "score hash";

    /// <inheritdoc/>
    /// <remarks>A hash cannot go on from a commit: it always begins anew.</remarks>
    public void Start(long? mark)
    {
        if (mark > 0) throw new NotSupportedException("A score hash covers a stream from its beginning.");
    }

    /// <inheritdoc/>
    public void Write(RecordBatch records, ScoreBatch scores)
    {
        foreach (ref readonly var score in scores.Scores)
            Add(records.Id(score.Record), score.Probability);
        _scores += scores.Count;
    }

    /// <summary>Takes what was written into the hash.</summary>
    /// <returns>The number of scores.</returns>
    public long Flush()
    {
        _hash.AppendData(_buffer.AsSpan(0, _buffered));
        _buffered = 0;
        return _scores;
    }

    /// <summary>The hash of all scores so far, in lower-case hexadecimal.</summary>
    public string ToHexString()
    {
        Flush();
        return Convert.ToHexStringLower(_hash.GetCurrentHash());
    }

    /// <inheritdoc/>
    public void Dispose() => _hash.Dispose();

    private void Add(ReadOnlySpan<byte> id, double probability)
    {
        int length = id.Length + sizeof(double);
        if (_buffer.Length - _buffered < length)
        {
            Flush();
            if (_buffer.Length < length) _buffer = new byte[length];
        }
        id.CopyTo(_buffer.AsSpan(_buffered));
        BinaryPrimitives.WriteDoubleLittleEndian(_buffer.AsSpan(_buffered + id.Length), probability);
        _buffered += length;
    }
}
