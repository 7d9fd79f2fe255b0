namespace StreamLogit.Engine.Tests.Records;

/// <summary>What a field should hold.</summary>
internal readonly record struct OracleField(bool IsPresent, double? Number, string? Text);
