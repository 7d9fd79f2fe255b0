using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>What a record should be read as.</summary>
internal sealed class OracleRecord
{
    public RejectReason Reason { get; init; }

    public RecordKind Kind { get; set; }

    public string Id { get; set; } = "";

    public long TimeMicroseconds { get; set; }

    public int Label { get; set; }

    public double Weight { get; set; } = double.NaN;

    public OracleField[] Fields { get; init; } = [];

    public static OracleRecord Reject(RejectReason reason) => new() { Reason = reason, Kind = RecordKind.Reject };
}
