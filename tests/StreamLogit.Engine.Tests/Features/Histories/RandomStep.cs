namespace StreamLogit.Engine.Tests.Features.Histories;

/// <summary>An event of a random stream, or later its label.</summary>
internal sealed record RandomStep(PastEvent Event, int? Label = null, double Weight = 1);
