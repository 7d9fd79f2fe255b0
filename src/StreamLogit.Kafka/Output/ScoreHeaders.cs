using System.Buffers.Text;
using Confluent.Kafka;

namespace StreamLogit.Kafka.Output;

/// <summary>The headers of a score: <c>content-type</c>, and the model's version as decimal digits in <c>model-version</c>.</summary>
internal sealed class ScoreHeaders
{
    private const int MostDigits = 20;

    private readonly byte[] _digits = new byte[MostDigits];
    private Headers _headers = [];
    private byte[] _version = [];
    private long _current = -1;

    /// <summary>The headers for a version. They are used again: the client reads them before the next call.</summary>
    public Headers Of(long version)
    {
        if (version == _current) return _headers;
        Utf8Formatter.TryFormat(version, _digits, out int length);
        if (length != _version.Length)
        {
            _version = new byte[length];
            _headers = new Headers { { "content-type", "application/json"u8.ToArray() }, { "model-version", _version } };
        }
        _digits.AsSpan(0, length).CopyTo(_version);
        _current = version;
        return _headers;
    }
}
