namespace StreamLogit.Pipeline.Definition;

/// <summary>One step of a path: into an object by key, or into a list by index. A number in a variable's name may be either.</summary>
/// <param name="Key">The key, or null where only a list is meant.</param>
/// <param name="Index">The index, from 0, or null where only an object is meant.</param>
internal readonly record struct PathPart(string? Key, int? Index);
