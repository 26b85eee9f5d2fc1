"""Questions put to a case: functions from a Case to an Answer, each of them made of many runs or many states."""
