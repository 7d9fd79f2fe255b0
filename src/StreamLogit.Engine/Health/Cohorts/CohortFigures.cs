using System.Collections.Immutable;

namespace StreamLogit.Engine.Health.Cohorts;

/// <summary>Health by the time at which events were scored, not by that at which their labels came. Immutable.</summary>
/// <param name="Hours">Hours in which events were scored, the present one included, oldest first; as far back as the history of hours.</param>
/// <param name="Days">Days, as far back as the history of days.</param>
/// <param name="ByAge">The share of events that have their label, by their age now, youngest first. Ages are told to the hour, and to the day where hours are not kept.</param>
public sealed record CohortFigures(ImmutableArray<EventCohort> Hours, ImmutableArray<EventCohort> Days, ImmutableArray<LabelledAtAge> ByAge)
{
    /// <summary>Of no events.</summary>
    public static CohortFigures Empty { get; } = new([], [], []);

    /// <summary>Whether all is equal.</summary>
    public bool Equals(CohortFigures? other) =>
        other is not null && Hours.SequenceEqual(other.Hours) && Days.SequenceEqual(other.Days) && ByAge.SequenceEqual(other.ByAge);

    /// <inheritdoc/>
    public override int GetHashCode() => Hours.Length;
}
