namespace StreamLogit.Engine.Tests.Learning;

/// <summary>Feature values and the label of one event.</summary>
internal readonly record struct LabelledRow(double[] Values, int Label);
